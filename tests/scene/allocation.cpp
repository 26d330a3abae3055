// Queries take no memory from the heap: a counting operator new watches them.
#include "scene/support.h"

#include <doctest/doctest.h>
#include <atomic>
#include <cstdlib>
#include <new>

using namespace glint;
using namespace glint::testing;

namespace {
std::atomic<long> allocations = 0;
}

// Not inlined: g++ would see new beside free and warn of a mismatch that is none.
[[gnu::noinline]] void* operator new(std::size_t size) {
    ++allocations;
    if (void* place = std::malloc(size > 0 ? size : 1)) return place;
    throw std::bad_alloc();
}
[[gnu::noinline]] void operator delete(void* place) noexcept { std::free(place); }
[[gnu::noinline]] void operator delete(void* place, std::size_t) noexcept { std::free(place); }

TEST_CASE("queries allocate nothing") {
    const Scene scene = build_scene(strewn(66, 10, 5, true));
    RandomStream random(66);
    const long before = allocations;
    int hits = 0;
    for (int i = 0; i < 2000; ++i) {
        const Ray ray = random_ray(random, 6);
        hits += closest_hit(scene, ray).has_value() && occluded(scene, ray);
    }
    const long after = allocations;
    CHECK(before > 0);
    CHECK(after == before);
    CHECK(hits > 100);
}
