// Dividing a picture: measured texts first, the plot takes what remains.
#include <glint/core/error.h>
#include <glint/report/frame.h>

#include <algorithm>
#include <cmath>

namespace glint {

namespace {

constexpr double margin = 18, tick_length = 5, tick_gap = 4, label_gap = 7, bar_gap = 22, bar_width = 14;
constexpr double pointed_end = 11;
constexpr double sign_width = 24, sign_gap = 7, entry_gap = 22, legend_line = 20;
constexpr TextStyle title_style{.size = 17, .weight = Weight::semibold};
constexpr TextStyle subtitle_style{.size = 13, .colour = palette::quiet_ink};
constexpr TextStyle note_style{.size = 11, .colour = palette::quiet_ink};
constexpr TextStyle label_style{.size = 13, .align = Align::centre};
constexpr TextStyle number_style{.size = 12};
constexpr TextStyle legend_style{.size = 12.5, .anchor = Anchor::middle};

double text_height(const TextStyle& style) {
    const FontHeights heights = font_heights(style.size);
    return heights.ascent + heights.descent;
}

double line_height(const TextStyle& style) { return font_heights(style.size).line; }

double widest(std::span<const std::string> texts, const TextStyle& style) {
    double width = 0;
    for (const std::string& text : texts) width = std::max(width, text_width(text, style.size, style.weight));
    return width;
}

std::vector<std::string> lines_of(const std::string& text, double width, const TextStyle& style) {
    if (text.empty()) return {};
    return wrap_text(text, width, style.size, style.weight);
}

/// Adds lines of text whose boxes start at height `top`; returns where the last one ends.
double add_lines(Frame& frame, std::span<const std::string> lines, double x, double top,
                 const TextStyle& style) {
    for (const std::string& line : lines) {
        frame.texts.push_back(
            {.at = {x, top + font_heights(style.size).ascent}, .text = line, .style = style});
        top += line_height(style);
    }
    return lines.empty() ? top : top - line_height(style) + text_height(style);
}

/// Adds the legend in rows from height `top`; returns where it ends.
double add_legend(Frame& frame, double left, double right, double top) {
    double x = left, y = top;
    for (const LegendEntry& entry : frame.content.legend) {
        const double text_room = right - left - sign_width - sign_gap;
        const std::vector<std::string> lines = lines_of(entry.name, text_room, legend_style);
        const double width = sign_width + sign_gap + widest(lines, legend_style);
        if (x > left && x + width > right) x = left, y += legend_line;
        frame.legend.push_back({.entry = entry, .at = {x, y + legend_line / 2}});
        for (std::size_t i = 0; i < lines.size(); ++i)
            frame.texts.push_back(
                {.at = {x + sign_width + sign_gap, y + legend_line * (static_cast<double>(i) + 0.5)},
                 .text = lines[i],
                 .style = legend_style});
        if (lines.size() > 1)
            x = left, y += legend_line * static_cast<double>(lines.size());
        else
            x += width + entry_gap;
    }
    return x > left ? y + legend_line : y;
}

/// Lines of the three axis labels for a plot of the given size.
struct AxisLabels {
    std::vector<std::string> horizontal, vertical, colour;
};

AxisLabels axis_labels(const Frame& frame) {
    const auto lines = [](const std::optional<Axis>& axis, int exponent, double length) {
        return axis ? lines_of(label_text(axis->label, axis->unit, exponent), length, label_style)
                    : std::vector<std::string>{};
    };
    const std::optional<SettledScale>& colours = frame.content.colours;
    return {
        .horizontal = lines(frame.content.horizontal, frame.horizontal_ticks.exponent, frame.plot.width()),
        .vertical = lines(frame.content.vertical, frame.vertical_ticks.exponent, frame.plot.height()),
        .colour = lines(colours ? std::optional(colours->axis) : std::nullopt, frame.colour_ticks.exponent,
                        frame.colour_bar.height())};
}

/// How far the numbers of the horizontal axis stick out past an end of the plot.
double overhang(const Frame& frame, bool right) {
    double most = 0;
    for (std::size_t i = 0; i < frame.horizontal_ticks.values.size(); ++i) {
        const double x =
            share_along(*frame.content.horizontal, frame.horizontal_ticks.values[i]) * frame.plot.width();
        const double half = text_width(frame.horizontal_ticks.labels[i], number_style.size) / 2;
        most = std::max(most, right ? x + half - frame.plot.width() : half - x);
    }
    return most;
}

double label_depth(std::size_t lines) {
    return lines == 0 ? 0
                      : label_gap + line_height(label_style) * (static_cast<double>(lines) - 1) +
                            text_height(label_style);
}

/// One round of fitting: ticks and labels for the present plot, then the plot that leaves room for them.
void fit(Frame& frame, const PageBox& room) {
    const FrameContent& content = frame.content;
    if (content.horizontal)
        frame.horizontal_ticks =
            fitting_ticks(*content.horizontal, frame.plot.width(), AxisRun::across, number_style.size);
    if (content.vertical)
        frame.vertical_ticks =
            fitting_ticks(*content.vertical, frame.plot.height(), AxisRun::upward, number_style.size);
    if (content.colours)
        frame.colour_ticks = fitting_ticks(content.colours->axis, frame.colour_bar.height(), AxisRun::upward,
                                           number_style.size);
    const AxisLabels labels = axis_labels(frame);
    PageBox plot = room;
    if (content.vertical)
        plot.left += widest(frame.vertical_ticks.labels, number_style) + tick_length + tick_gap +
                     label_depth(labels.vertical.size());
    double right_side = content.right_room;
    if (content.horizontal) {
        plot.left = std::max(plot.left, room.left + overhang(frame, false));
        right_side = std::max(right_side, overhang(frame, true));
        plot.bottom -=
            tick_length + tick_gap + text_height(number_style) + label_depth(labels.horizontal.size());
    }
    if (content.colours) {
        right_side = std::max(bar_gap, right_side + 10) + bar_width + tick_length + tick_gap +
                     widest(frame.colour_ticks.labels, number_style) + label_depth(labels.colour.size());
        plot.bottom = std::min(plot.bottom, room.bottom - text_height(number_style) / 2);
    }
    plot.right -= right_side;
    if (content.vertical || content.colours) plot.top += text_height(number_style) / 2;
    frame.spare_width = frame.spare_height = 0;
    if (content.aspect > 0 && content.horizontal && content.vertical) {
        const auto span = [](const Axis& axis) { return std::abs(axis.range.high - axis.range.low); };
        const double wanted = content.aspect * span(*content.vertical) / span(*content.horizontal);
        if (const double height = plot.width() * wanted; height < plot.height()) {
            frame.spare_height = plot.height() - height;
            plot.bottom = plot.top + height;
        } else {
            frame.spare_width = plot.width() - plot.height() / wanted;
            plot.right -= frame.spare_width;
        }
    }
    frame.plot = {std::round(plot.left), std::round(plot.top), std::round(plot.right),
                  std::round(plot.bottom)};
    if (!(frame.plot.width() >= 40 && frame.plot.height() >= 40))
        throw Error(
            Problem{.what = "a picture is too small for what it has to show", .accepted = "a larger page"});
    if (!content.colours) return;
    const double left =
        frame.plot.right + std::max(bar_gap, std::round(overhang(frame, true)) + 10 + content.right_room);
    frame.colour_bar = {left, frame.plot.top, left + bar_width, frame.plot.bottom};
    if (!content.vertical) {
        const double spare = std::max(0.0, frame.colour_bar.height() - 340);
        frame.colour_bar.top += std::round(spare / 2);
        frame.colour_bar.bottom -= std::round(spare / 2);
    }
    if (content.colours->above) frame.colour_bar.top += pointed_end;
    if (content.colours->below) frame.colour_bar.bottom -= pointed_end;
}

/// Texts of an upward axis: numbers right or left of it, label beyond them.
void add_upward_texts(Frame& frame, const Axis& axis, const Ticks& ticks, std::span<const std::string> label,
                      const PageBox& box, bool on_left) {
    const double side = on_left ? -1 : 1, start = on_left ? box.left : box.right;
    TextStyle style = number_style;
    style.align = on_left ? Align::right : Align::left;
    style.anchor = Anchor::middle;
    for (std::size_t i = 0; i < ticks.values.size(); ++i)
        frame.texts.push_back({.at = {start + side * (tick_length + tick_gap),
                                      box.bottom - share_along(axis, ticks.values[i]) * box.height()},
                               .text = ticks.labels[i],
                               .style = style});
    style = label_style;
    style.reading = Reading::upward;
    const FontHeights heights = font_heights(style.size);
    const double numbers = tick_length + tick_gap + widest(ticks.labels, number_style) + label_gap;
    // Lines read from left to right once turned, so on the left the last one is next to the numbers.
    double baseline = on_left ? start - numbers - heights.descent -
                                    line_height(style) * (static_cast<double>(label.size()) - 1)
                              : start + numbers + heights.ascent;
    for (const std::string& line : label) {
        frame.texts.push_back({.at = {baseline, box.centre().y()}, .text = line, .style = style});
        baseline += line_height(style);
    }
}

void add_axis_texts(Frame& frame) {
    const AxisLabels labels = axis_labels(frame);
    const PageBox plot = frame.plot;
    if (frame.content.horizontal) {
        TextStyle style = number_style;
        style.align = Align::centre;
        const double top = plot.bottom + tick_length + tick_gap;
        for (std::size_t i = 0; i < frame.horizontal_ticks.values.size(); ++i) {
            const double x =
                plot.left +
                share_along(*frame.content.horizontal, frame.horizontal_ticks.values[i]) * plot.width();
            add_lines(frame, {&frame.horizontal_ticks.labels[i], 1}, x, top, style);
        }
        add_lines(frame, labels.horizontal, plot.centre().x(), top + text_height(style) + label_gap,
                  label_style);
    }
    if (frame.content.vertical)
        add_upward_texts(frame, *frame.content.vertical, frame.vertical_ticks, labels.vertical, plot, true);
    if (frame.content.colours)
        add_upward_texts(frame, frame.content.colours->axis, frame.colour_ticks, labels.colour,
                         frame.colour_bar, false);
}

}  // namespace

Vec2 Frame::place(const Vec2& data) const {
    return {plot.left + share_along(*content.horizontal, data.x()) * plot.width(),
            plot.bottom - share_along(*content.vertical, data.y()) * plot.height()};
}

Frame lay_out(const PageBox& page, const FrameContent& content) {
    Frame frame{.content = content};
    PageBox room = page.grown(-margin);
    const Heading& heading = content.heading;
    const auto title = lines_of(heading.title, room.width(), title_style);
    const auto subtitle = lines_of(heading.subtitle, room.width(), subtitle_style);
    const auto note = lines_of(heading.note, room.width(), note_style);
    double y = room.top - 4;
    if (!title.empty()) y = add_lines(frame, title, room.left, y, title_style) + 5;
    if (!subtitle.empty()) y = add_lines(frame, subtitle, room.left, y, subtitle_style) + 5;
    if (!content.legend.empty()) y = add_legend(frame, room.left, room.right, y + 3);
    room.top = std::max(room.top, y + 8);
    if (!note.empty()) {
        const double height =
            line_height(note_style) * (static_cast<double>(note.size()) - 1) + text_height(note_style);
        add_lines(frame, note, room.left, room.bottom + 6 - height, note_style);
        room.bottom -= height + 6;
    }
    frame.plot = frame.colour_bar = room;
    // Numbers depend on the plot's size and the plot's size on the numbers; both settle at once in practice,
    // and the last round ends with ticks for the plot it found.
    for (int round = 0; round < 4; ++round) fit(frame, room);
    add_axis_texts(frame);
    return frame;
}

FittedPage fit_page(const PageSize& size, const FrameContent& content) {
    FittedPage fitted{.size = size, .frame = lay_out({0, 0, size.width, size.height}, content)};
    // A narrower page may need more lines of heading, so width goes first; half a page is kept for the words.
    const double width = std::floor(std::min(fitted.frame.spare_width, size.width / 2));
    if (width > 0) {
        fitted.size.width -= width;
        fitted.frame = lay_out({0, 0, fitted.size.width, fitted.size.height}, content);
    }
    const double height = std::floor(fitted.frame.spare_height);
    if (height > 0) {
        fitted.size.height -= height;
        fitted.frame = lay_out({0, 0, fitted.size.width, fitted.size.height}, content);
    }
    return fitted;
}

}  // namespace glint
