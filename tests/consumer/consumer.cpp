// Evaluates a design with the installed library: consumer DESIGN.xml
#include <glint/plan/assess.h>
#include <glint/safety/caution.h>

#include <exception>
#include <iostream>

int main(int argc, char** argv) {
    if (argc != 2) return 2;
    try {
        const glint::LoadedDesign loaded = glint::load_design(argv[1]);
        const glint::Assessment assessment = glint::assess(loaded);
        std::cout << glint::caution_line << "\n"
                  << assessment.points.size() << " points, AE/AEL " << assessment.safety.worst_ratio << "\n";
        return assessment.all_met() ? 0 : 1;
    } catch (const std::exception& error) {
        std::cerr << error.what() << "\n";
        return 2;
    }
}
