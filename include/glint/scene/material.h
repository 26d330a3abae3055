// Materials: diffuse reflectance over wavelength.
#pragma once

#include <string>
#include <vector>

namespace glint {

/// One entry of a reflectance table.
struct ReflectanceAt {
    double wavelength = 0;   ///< m, above 0
    double reflectance = 0;  ///< share of the light that comes back, 0 to 1
};

/// What a surface is made of. The table has at least one entry, wavelengths strictly rising.
struct Material {
    std::string name;
    std::vector<ReflectanceAt> table;
};

/// Reflectance of a material at a wavelength [m]: constant for one entry, else linear between entries and
/// held outside them. The table must be as described at Material (build_scene checks it).
[[nodiscard]] double reflectance(const Material& material, double wavelength);

}  // namespace glint
