// Text helpers.
#include <glint/core/text.h>

#include <doctest/doctest.h>

using namespace glint;

TEST_CASE("edit distance counts inserts, deletes, replaces and swaps") {
    CHECK(edit_distance("pitch", "pitch") == 0);
    CHECK(edit_distance("ptich", "pitch") == 1);
    CHECK(edit_distance("pitc", "pitch") == 1);
    CHECK(edit_distance("pinch", "pitch") == 1);
    CHECK(edit_distance("", "abc") == 3);
}

TEST_CASE("the nearest name is only named when it is near") {
    const std::vector<std::string> names{"pitch", "rows", "columns"};
    CHECK(nearest_name("ptich", names) == "pitch");
    CHECK(nearest_name("colums", names) == "columns");
    CHECK(nearest_name("wavelength", names).empty());
}

TEST_CASE("numbers are read whole or not at all, whatever follows") {
    CHECK(parse_number(" +1.5e3 ").value == 1500);
    for (const char* text : {"", "1,5", "1.5x", "nan", "inf", "1e999", "0x1p3"})
        CHECK_MESSAGE(!parse_number(text).good, text);
}

TEST_CASE("wrapped text keeps every word and no line is too wide") {
    CHECK(wrapped("one two three", 7) == "one two\nthree\n");
    CHECK(wrapped("one two", 80, 2) == "  one two\n");
    CHECK(wrapped("unbreakable", 4) == "unbreakable\n");
}

TEST_CASE("split keeps empty pieces and trims blanks") {
    const auto pieces = split(" a , ,b", ',');
    REQUIRE(pieces.size() == 3);
    CHECK(pieces[0] == "a");
    CHECK(pieces[1].empty());
    CHECK(pieces[2] == "b");
}
