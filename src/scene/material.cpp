// Materials: diffuse reflectance over wavelength.
#include <glint/scene/material.h>

#include <algorithm>

namespace glint {

double reflectance(const Material& material, double wavelength) {
    const std::vector<ReflectanceAt>& table = material.table;
    const auto above =
        std::upper_bound(table.begin(), table.end(), wavelength,
                         [](double value, const ReflectanceAt& entry) { return value < entry.wavelength; });
    if (above == table.begin()) return table.front().reflectance;
    if (above == table.end()) return table.back().reflectance;
    const ReflectanceAt& low = *(above - 1);
    const double share = (wavelength - low.wavelength) / (above->wavelength - low.wavelength);
    return low.reflectance + share * (above->reflectance - low.reflectance);
}

}  // namespace glint
