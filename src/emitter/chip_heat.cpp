// The heat of a whole emitter chip: how emitters warm each other, and the temperatures that result.
#include <glint/core/constants.h>
#include <glint/core/error.h>
#include <glint/core/parallel.h>
#include <glint/emitter/chip_heat.h>
#include <glint/emitter/layout.h>

#include <unsupported/Eigen/FFT>

#include <algorithm>
#include <cmath>
#include <complex>
#include <limits>
#include <numeric>
#include <optional>
#include <utility>

namespace glint {
namespace {

using Complex = std::complex<double>;

// Transforms of fewer cells are over before other threads have woken up.
constexpr std::size_t worth_threads = 1 << 18;

// The places along one direction as multiples of a step.
struct Axis {
    double step = 0;
    int count = 1;
    std::vector<int> index;  // [n]
};

// None when the places are no multiples of the smallest gap. Places nearer than 1e-3 of the smallest distance
// of two emitters are not taken for a gap: they are rounding, or the check below refuses them.
std::optional<Axis> axis_of(const std::vector<double>& places, double nearest) {
    std::vector<double> sorted = places;
    std::ranges::sort(sorted);
    double step = std::numeric_limits<double>::infinity();
    for (std::size_t i = 1; i < sorted.size(); ++i)
        if (const double gap = sorted[i] - sorted[i - 1]; gap > 1e-3 * nearest) step = std::min(step, gap);
    Axis axis{.index = std::vector<int>(places.size(), 0)};
    const double low = sorted.front(), span = sorted.back() - low;
    const double steps = std::isfinite(step) ? std::round(span / step) : 0;
    if (steps > 1e7) return {};
    axis.count = static_cast<int>(steps) + 1;
    axis.step = steps > 0 ? span / steps : nearest > 0 ? nearest : 1;
    for (std::size_t i = 0; i < places.size(); ++i) {
        const double place = (places[i] - low) / axis.step;
        axis.index[i] = static_cast<int>(std::lround(place));
        if (!(std::abs(place - axis.index[i]) <= 1e-6)) return {};
    }
    return axis;
}

// Smallest length of at least `least` that the FFT takes fast: 4 times a product of 2, 3 and 5. (A length
// that 4 does not divide makes a real transform as slow as a complex one.)
int fast_length(int least) {
    for (int quarter = std::max(1, (least + 3) / 4);; ++quarter) {
        int rest = quarter;
        for (const int factor : {2, 3, 5})
            while (rest % factor == 0) rest /= factor;
        if (rest == 1) return 4 * quarter;
    }
}

// Transforms the rows of a real array [rows x columns] into columns of a spectrum [columns/2 + 1 x height].
std::vector<Complex> transformed_rows(const std::vector<double>& cells, int rows, int columns, int height) {
    const int half = columns / 2 + 1;
    std::vector<Complex> spectrum(static_cast<std::size_t>(half) * height);
#pragma omp parallel if (spectrum.size() > worth_threads)
    {
        Eigen::FFT<double> fft(Eigen::default_fft_impl<double>(), Eigen::FFT<double>::HalfSpectrum);
        std::vector<Complex> line(half);
#pragma omp for
        for (int r = 0; r < rows; ++r) {
            fft.fwd(line.data(), &cells[static_cast<std::size_t>(r) * columns], columns);
            for (int c = 0; c < half; ++c) spectrum[static_cast<std::size_t>(c) * height + r] = line[c];
        }
    }
    return spectrum;
}

std::optional<LatticeCoupling> lattice_coupling(const std::vector<Vec2>& positions, double nearest,
                                                const Substrate& substrate) {
    std::vector<double> u, v;
    for (const Vec2& p : positions) u.push_back(p.x()), v.push_back(p.y());
    const std::optional<Axis> across = axis_of(u, nearest), up = axis_of(v, nearest);
    if (!across || !up) return {};
    const double points = static_cast<double>(across->count) * up->count;
    if (points > 16.0 * static_cast<double>(positions.size())) return {};

    LatticeCoupling lattice{.rows = up->count,
                            .padded_columns = fast_length(2 * across->count - 1),
                            .padded_rows = fast_length(2 * up->count - 1)};
    const int columns = lattice.padded_columns, height = lattice.padded_rows, half = columns / 2 + 1;
    for (std::size_t i = 0; i < positions.size(); ++i)
        lattice.cell_of.push_back(up->index[i] * columns + across->index[i]);

    // The coupling at every offset; negative offsets lie at the far end of the array.
    std::vector<double> kernel(static_cast<std::size_t>(columns) * height, 0.0);
    parallel_for(static_cast<std::size_t>(up->count), [&](std::size_t row) {
        const int r = static_cast<int>(row), r_back = (height - r) % height;
        for (int c = r == 0 ? 1 : 0; c < across->count; ++c) {
            const double rise = coupling(std::hypot(c * across->step, r * up->step), substrate);
            const int c_back = (columns - c) % columns;
            for (const int y : {r, r_back})
                for (const int x : {c, c_back}) kernel[static_cast<std::size_t>(y) * columns + x] = rise;
        }
    });
    const std::vector<Complex> rows = transformed_rows(kernel, height, columns, height);
    lattice.spectrum.resize(rows.size());
#pragma omp parallel if (rows.size() > worth_threads)
    {
        Eigen::FFT<double> fft;
        std::vector<Complex> line(height);
#pragma omp for
        for (int c = 0; c < half; ++c) {
            const std::size_t start = static_cast<std::size_t>(c) * height;
            fft.fwd(line.data(), &rows[start], height);
            for (int r = 0; r < height; ++r) lattice.spectrum[start + r] = line[r].real();
        }
    }
    return lattice;
}

std::vector<double> rises(const LatticeCoupling& lattice, std::span<const double> heat) {
    const int columns = lattice.padded_columns, height = lattice.padded_rows, half = columns / 2 + 1;
    std::vector<double> cells(static_cast<std::size_t>(lattice.rows) * columns, 0.0);
    for (std::size_t i = 0; i < heat.size(); ++i) cells[lattice.cell_of[i]] = heat[i];
    std::vector<Complex> spectrum = transformed_rows(cells, lattice.rows, columns, height);
#pragma omp parallel if (spectrum.size() > worth_threads)
    {
        Eigen::FFT<double> fft(Eigen::default_fft_impl<double>(), Eigen::FFT<double>::HalfSpectrum);
        std::vector<Complex> line(std::max(half, height));
#pragma omp for
        for (int c = 0; c < half; ++c) {
            const std::size_t start = static_cast<std::size_t>(c) * height;
            fft.fwd(line.data(), &spectrum[start], height);
            for (int r = 0; r < height; ++r) line[r] *= lattice.spectrum[start + r];
            fft.inv(&spectrum[start], line.data(), height);
        }
#pragma omp for
        for (int r = 0; r < lattice.rows; ++r) {
            for (int c = 0; c < half; ++c) line[c] = spectrum[static_cast<std::size_t>(c) * height + r];
            fft.inv(&cells[static_cast<std::size_t>(r) * columns], line.data(), columns);
        }
    }
    std::vector<double> rise(heat.size());
    for (std::size_t i = 0; i < heat.size(); ++i) rise[i] = cells[lattice.cell_of[i]];
    return rise;
}

// Distance past which an even sheet of heat on a slab adds less than 1e-9 of its rise: beyond r lies 8/pi^2
// x K1(x) of it, x = pi r/(2 h), 5e-10 at x = 23; the faster modes add nothing there.
double reach_of(double thickness) { return 23 * 2 / pi * thickness; }

PairCoupling pair_coupling(const std::vector<Vec2>& positions, const Substrate& substrate) {
    Vec2 low = positions.front(), high = low;
    for (const Vec2& p : positions) low = low.cwiseMin(p), high = high.cwiseMax(p);
    const Vec2 size = high - low;
    PairCoupling pairs{.reach = 1.001 * size.norm(),
                       .distance_times_coupling = {1 / (2 * pi * substrate.conductivity)}};
    if (substrate.thickness) {
        pairs.reach = std::min(pairs.reach, reach_of(*substrate.thickness));
        // r G(r) falls smoothly from 1/(2 pi k) over a thickness; the cubic through four nodes is then good
        // to 1e-11 of that.
        pairs.node_spacing = *substrate.thickness / 256;
        const std::size_t nodes = static_cast<std::size_t>(pairs.reach / pairs.node_spacing) + 4;
        pairs.distance_times_coupling.resize(nodes);
        parallel_for(nodes - 1, [&](std::size_t node) {
            const double r = static_cast<double>(node + 1) * pairs.node_spacing;
            pairs.distance_times_coupling[node + 1] = r * coupling(r, substrate);
        });
    }
    // As wide as heat reaches, or wider where that would make many more cells than emitters.
    const double count = static_cast<double>(positions.size());
    const double cell =
        std::max({pairs.reach, std::sqrt(size.x() * size.y() / count), size.maxCoeff() / count});
    pairs.columns = static_cast<int>(size.x() / cell) + 1;
    pairs.rows = static_cast<int>(size.y() / cell) + 1;

    std::vector<int> cell_of;
    for (const Vec2& p : positions) {
        const Vec2 place = (p - low) / cell;
        cell_of.push_back(static_cast<int>(place.y()) * pairs.columns + static_cast<int>(place.x()));
    }
    pairs.order.resize(positions.size());
    std::iota(pairs.order.begin(), pairs.order.end(), 0);
    std::ranges::stable_sort(pairs.order, {}, [&](int i) { return cell_of[i]; });
    pairs.first.assign(static_cast<std::size_t>(pairs.columns) * pairs.rows + 1, 0);
    for (const int c : cell_of) ++pairs.first[c + 1];
    std::partial_sum(pairs.first.begin(), pairs.first.end(), pairs.first.begin());
    for (const int i : pairs.order) pairs.places.push_back(positions[i]);
    return pairs;
}

double pair_rise(const PairCoupling& pairs, double distance) {
    if (pairs.node_spacing == 0) return pairs.distance_times_coupling.front() / distance;
    // Lagrange's cubic through the two nodes on either side, or through the first four.
    const double place = distance / pairs.node_spacing;
    const int base = std::max(0, static_cast<int>(place) - 1);
    const double* node = &pairs.distance_times_coupling[base];
    const double t0 = place - base, t1 = t0 - 1, t2 = t0 - 2, t3 = t0 - 3;
    return ((t0 * t1 * t2 * node[3] - t1 * t2 * t3 * node[0]) / 6 +
            (t0 * t2 * t3 * node[1] - t0 * t1 * t3 * node[2]) / 2) /
           distance;
}

std::vector<double> rises(const PairCoupling& pairs, std::span<const double> heat) {
    const std::size_t cells = pairs.first.size() - 1;
    std::vector<double> sorted_heat, rise(heat.size());
    for (const int i : pairs.order) sorted_heat.push_back(heat[i]);
    std::vector<std::pair<int, int>> target;  // of every emitter in `order`: its row and column of cells
    for (std::size_t cell = 0; cell < cells; ++cell)
        target.resize(pairs.first[cell + 1],
                      {static_cast<int>(cell) / pairs.columns, static_cast<int>(cell) % pairs.columns});
    parallel_for(heat.size(), [&](std::size_t i) {
        const auto [row, column] = target[i];
        const int left = std::max(0, column - 1), right = std::min(pairs.columns - 1, column + 1);
        double sum = 0;
        for (int y = std::max(0, row - 1); y <= std::min(pairs.rows - 1, row + 1); ++y) {
            const int last = pairs.first[y * pairs.columns + right + 1];
            for (int j = pairs.first[y * pairs.columns + left]; j < last; ++j) {
                const double distance = (pairs.places[j] - pairs.places[i]).norm();
                if (sorted_heat[j] != 0 && distance > 0 && distance <= pairs.reach)
                    sum += sorted_heat[j] * pair_rise(pairs, distance);
            }
        }
        rise[pairs.order[i]] = sum;
    });
    return rise;
}

// By which factor steps shrink, the greatest over the emitters. Emitters that hardly moved say nothing of how
// fast the others come to rest.
double shrinkage(const std::vector<double>& before, const std::vector<double>& step) {
    double greatest = 0, most = 0;
    for (const double s : before) greatest = std::max(greatest, std::abs(s));
    for (std::size_t i = 0; i < step.size(); ++i)
        if (std::abs(before[i]) > 1e-3 * greatest) most = std::max(most, std::abs(step[i] / before[i]));
    return most;
}

}  // namespace

HeatCoupling::HeatCoupling(const std::vector<Vec2>& positions, const Substrate& substrate,
                           double package_resistance)
    : size_(positions.size()), package_resistance_(package_resistance) {
    const double nearest = nearest_distance(positions);
    if (positions.size() > 1 && nearest == 0)
        throw Error(Problem{.what = "two emitters at the same place", .path = "emitters/layout"});
    if (std::optional<LatticeCoupling> lattice = lattice_coupling(positions, nearest, substrate))
        coupling_ = *std::move(lattice);
    else
        coupling_ = pair_coupling(positions, substrate);
}

std::vector<double> HeatCoupling::rise_of(std::span<const double> heat) const {
    std::vector<double> rise = std::visit([&](const auto& form) { return rises(form, heat); }, coupling_);
    const double package = package_resistance_ * std::accumulate(heat.begin(), heat.end(), 0.0);
    for (double& r : rise) r += package;
    return rise;
}

ChipTemperatures solve_chip(const HeatCoupling& coupling, const HeatAt& heat_at,
                            const ChipConditions& conditions) {
    const std::size_t n = coupling.size();
    ChipTemperatures chip{.temperature = std::vector<double>(n, conditions.sink_temperature),
                          .heat = std::vector<double>(n)};
    // From the cold side each round is warmer than the one before and none passes the lowest solution, when
    // no heat falls with temperature. Jumps ahead (Aitken) were tried: they cross solutions that lie near a
    // fold.
    std::vector<double> before(n), step(n);
    while (!chip.settled && chip.iterations < conditions.most_iterations) {
        ++chip.iterations;
        for (std::size_t i = 0; i < n; ++i) chip.heat[i] = heat_at(i, chip.temperature[i]);
        const std::vector<double> rise = coupling.rise_of(chip.heat);
        double largest = 0, greatest_rise = 0;
        for (std::size_t i = 0; i < n; ++i) {
            const double total = conditions.self_resistance * chip.heat[i] + rise[i];
            step[i] = conditions.sink_temperature + total - chip.temperature[i];
            chip.temperature[i] += step[i];
            if (!(chip.temperature[i] <= conditions.top_temperature)) return chip;
            largest = std::max(largest, std::abs(step[i]));
            greatest_rise = std::max(greatest_rise, std::abs(total));
        }
        // While steps shrink by a factor s, all that are still to come add up to s/(1 - s) of the last one.
        const double s = chip.iterations > 1 ? shrinkage(before, step) : 1;
        chip.settled =
            largest == 0 || (s < 1 && s / (1 - s) * largest <= conditions.tolerance * greatest_rise);
        std::swap(before, step);
    }
    return chip;
}

double endless_array_resistance(double diameter, double pitch, const Substrate& substrate) {
    const double narrow = diameter * std::sqrt(pi) / (2 * pitch);
    return std::pow(1 - narrow, 1.5) * disc_resistance(diameter, substrate.conductivity) +
           substrate.thickness.value() / (substrate.conductivity * pitch * pitch);
}

}  // namespace glint
