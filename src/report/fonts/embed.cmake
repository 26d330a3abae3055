# Writes every font beside this script as a byte array into one C++ source file.
# Use: cmake -DOUTPUT=fonts.cpp -P embed.cmake
file(GLOB fonts ${CMAKE_CURRENT_LIST_DIR}/*.ttf)
set(text "// Generated from the fonts in src/report/fonts; do not edit.\n#include \"report/fonts/embedded.h\"\n\n")
string(APPEND text "namespace glint::embedded {\n")
foreach(font ${fonts})
    get_filename_component(name ${font} NAME_WE)
    file(READ ${font} bytes HEX)
    string(REGEX REPLACE "([0-9a-f][0-9a-f])" "0x\\1," bytes "${bytes}")
    string(APPEND text "static constexpr unsigned char ${name}_bytes[] = {${bytes}};\n")
    string(APPEND text "const std::span<const unsigned char> ${name}{${name}_bytes};\n")
endforeach()
string(APPEND text "}  // namespace glint::embedded\n")
file(WRITE ${OUTPUT} "${text}")
