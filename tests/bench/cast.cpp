// Casting against a general ray-tracing library (Embree) on the same rays in one process: a terrain seen from
// one point by pixels in square tiles. Hits are checked to agree before anything is timed.
#include <glint/scene/cast.h>

#include <benchmark/benchmark.h>
#include <embree3/rtcore.h>
#include <chrono>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <memory>
#include <vector>

using namespace glint;

namespace {

// A rolling surface of 2 n^2 triangles, 40 m by 40 m.
Mesh terrain(int n) {
    Mesh mesh;
    for (int i = 0; i <= n; ++i)
        for (int k = 0; k <= n; ++k) {
            const double x = 40.0 * i / n, y = 40.0 * k / n - 20;
            mesh.vertices.emplace_back(x, y, std::sin(x) * std::cos(0.7 * y) + 0.1 * std::sin(9 * x + 5 * y));
        }
    const auto at = [n](int i, int k) { return i * (n + 1) + k; };
    for (int i = 0; i < n; ++i)
        for (int k = 0; k < n; ++k) {
            mesh.triangles.push_back({at(i, k), at(i + 1, k), at(i + 1, k + 1)});
            mesh.triangles.push_back({at(i, k), at(i + 1, k + 1), at(i, k + 1)});
        }
    return mesh;
}

// 512 x 512 pixels over 60 by 40 degrees, tile by tile of 8 x 8.
std::vector<Ray> pixels() {
    constexpr int side = 512, tile = 8;
    std::vector<Ray> rays;
    for (int row = 0; row < side; row += tile)
        for (int column = 0; column < side; column += tile)
            for (int i = 0; i < tile * tile; ++i) {
                const double u = (column + i % tile + 0.5) / side - 0.5,
                             v = (row + i / tile + 0.5) / side - 0.5;
                rays.push_back(
                    {.origin = Vec3(-1, 0, 4), .direction = Vec3(1, -1.1 * u, -0.4 - 0.7 * v).normalized()});
            }
    return rays;
}

using Device = std::unique_ptr<RTCDeviceTy, decltype(&rtcReleaseDevice)>;
using PeerScene = std::unique_ptr<RTCSceneTy, decltype(&rtcReleaseScene)>;

PeerScene peer_scene(RTCDevice device, const Mesh& mesh) {
    PeerScene scene(rtcNewScene(device), &rtcReleaseScene);
    rtcSetSceneFlags(scene.get(), RTC_SCENE_FLAG_ROBUST);
    RTCGeometry geometry = rtcNewGeometry(device, RTC_GEOMETRY_TYPE_TRIANGLE);
    auto* vertices = static_cast<float*>(rtcSetNewGeometryBuffer(
        geometry, RTC_BUFFER_TYPE_VERTEX, 0, RTC_FORMAT_FLOAT3, 3 * sizeof(float), mesh.vertices.size()));
    for (const Vec3& vertex : mesh.vertices)
        for (int axis = 0; axis < 3; ++axis) *vertices++ = static_cast<float>(vertex[axis]);
    auto* corners = static_cast<unsigned*>(rtcSetNewGeometryBuffer(
        geometry, RTC_BUFFER_TYPE_INDEX, 0, RTC_FORMAT_UINT3, 3 * sizeof(unsigned), mesh.triangles.size()));
    for (const auto& triangle : mesh.triangles)
        for (const int corner : triangle) *corners++ = static_cast<unsigned>(corner);
    rtcCommitGeometry(geometry);
    rtcAttachGeometry(scene.get(), geometry);
    rtcReleaseGeometry(geometry);
    rtcCommitScene(scene.get());
    return scene;
}

RTCRayHit peer_ray(const Ray& ray) {
    RTCRayHit result{};
    result.ray.org_x = static_cast<float>(ray.origin.x()),
    result.ray.org_y = static_cast<float>(ray.origin.y());
    result.ray.org_z = static_cast<float>(ray.origin.z());
    result.ray.dir_x = static_cast<float>(ray.direction.x()),
    result.ray.dir_y = static_cast<float>(ray.direction.y());
    result.ray.dir_z = static_cast<float>(ray.direction.z());
    result.ray.tfar = std::numeric_limits<float>::infinity();
    result.ray.mask = ~0U;
    result.hit.geomID = result.hit.instID[0] = RTC_INVALID_GEOMETRY_ID;
    return result;
}

template <class Work>
double seconds(const Work& work) {
    const auto start = std::chrono::steady_clock::now();
    work();
    return std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
}

// Single rays of ours, and the peer's single and stream mode, on one thread.
void pixels_on_terrain(benchmark::State& state) {
    const Mesh mesh = terrain(static_cast<int>(state.range(0)));
    const Device device(rtcNewDevice("threads=1"), &rtcReleaseDevice);
    PeerScene peer(nullptr, &rtcReleaseScene);
    SceneParts parts{.materials = {{"grey", {{940e-9, 0.5}}}}, .objects = {{"terrain", 0}}};
    parts.meshes.push_back({mesh, 0});
    Scene scene;
    state.counters["build_over_peer"] = seconds([&] { scene = build_scene(parts); }) /
                                        seconds([&] { peer = peer_scene(device.get(), mesh); });

    const std::vector<Ray> rays = pixels();
    std::vector<double> ours(rays.size());
    std::vector<RTCRayHit> theirs(rays.size());
    const auto cast_ours = [&] {
        for (std::size_t i = 0; i < rays.size(); ++i) {
            const std::optional<Hit> hit = closest_hit(scene, rays[i]);
            ours[i] = hit ? hit->distance : std::numeric_limits<double>::infinity();
        }
    };
    const auto renew = [&] {
        for (std::size_t i = 0; i < rays.size(); ++i) theirs[i] = peer_ray(rays[i]);
    };
    RTCIntersectContext context;
    rtcInitIntersectContext(&context);
    context.flags = RTC_INTERSECT_CONTEXT_FLAG_COHERENT;
    const auto cast_single = [&] {
        for (RTCRayHit& ray : theirs) rtcIntersect1(peer.get(), &context, &ray);
    };
    const auto cast_stream = [&] {
        for (std::size_t i = 0; i < theirs.size(); i += 64)
            rtcIntersect1M(peer.get(), &context, &theirs[i], 64, sizeof(RTCRayHit));
    };

    cast_ours(), renew(), cast_single();
    std::size_t apart = 0;
    for (std::size_t i = 0; i < rays.size(); ++i) {
        const double other = theirs[i].ray.tfar;
        // Float against double: 1e-5 of the distance but at silhouettes.
        if (std::isfinite(ours[i]) != std::isfinite(other) ||
            (std::isfinite(other) && std::abs(ours[i] - other) > 1e-4 * other))
            ++apart;
    }
    if (apart > rays.size() / 2000) {
        std::fprintf(stderr, "%zu of %zu hits differ from those of the peer\n", apart, rays.size());
        std::exit(1);
    }

    double own = 0, single = 0, stream = 0;
    for (auto _ : state) {
        own += seconds(cast_ours);
        renew(), single += seconds(cast_single);
        renew(), stream += seconds(cast_stream);
    }
    const double count = static_cast<double>(rays.size() * state.iterations());
    state.counters["ours_Mrays"] = 1e-6 * count / own;
    state.counters["peer_single_Mrays"] = 1e-6 * count / single;
    state.counters["peer_stream_Mrays"] = 1e-6 * count / stream;
    state.counters["apart"] = static_cast<double>(apart);
}

}  // namespace

// 5 thousand, 200 thousand and 2 million triangles.
BENCHMARK(pixels_on_terrain)->Arg(50)->Arg(316)->Arg(1000)->Unit(benchmark::kMillisecond)->UseRealTime();
