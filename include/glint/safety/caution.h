// The caution that heads every safety table, page and file.
#pragma once

#include <string_view>

namespace glint {

/// The caution as one full paragraph, for the head of reports, help texts and documents.
inline constexpr std::string_view caution_paragraph =
    "CAUTION. These figures are an engineering estimate for early design, worked out from nominal data. They "
    "are not a laser classification and no permission to expose anybody to the light. A product is "
    "classified "
    "only by measurement, done by a competent body under the edition of IEC 60825-1 and the local rules in "
    "force. Several rules and numbers behind these figures come from memory or from secondary sources and "
    "have "
    "to be confirmed against the purchased standard. Near-infrared light is invisible and gives no aversion "
    "response: nobody will blink or look away in time. Follow local codes and licensed practice.";

/// The caution in one line, for places with room for one line only.
inline constexpr std::string_view caution_line =
    "Early-design estimate from nominal data; no laser classification, no permission to expose anybody.";

/// What every verdict from 1250 nm to 1400 nm has to say.
inline constexpr std::string_view second_limit_note =
    "From 1250 nm to 1400 nm the Class 3B limit is a second bound. EU: EN 60825-1:2014/A11:2021 sets an "
    "additional limit here that is not in these tables: have it checked before relying on this class.";

}  // namespace glint
