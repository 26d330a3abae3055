// Reading whole files, and writing a set of files that appears all at once or not at all.
#include <glint/core/error.h>
#include <glint/core/files.h>

#include <fcntl.h>
#include <unistd.h>
#include <cerrno>
#include <cstring>
#include <fstream>
#include <memory>
#include <system_error>

namespace glint {
namespace fs = std::filesystem;
namespace {

[[noreturn]] void refuse(const fs::path& path, const std::string& what) {
    throw Error(
        {.what = what + ": " + std::strerror(errno), .accepted = {}, .path = {}, .file = path.string()},
        Blame::machine);
}

void write_whole(const fs::path& path, std::string_view content) {
    const int handle = ::open(path.c_str(), O_WRONLY | O_CREAT | O_TRUNC | O_CLOEXEC, 0644);
    if (handle < 0) refuse(path, "cannot create the file");
    while (!content.empty()) {
        const ssize_t written = ::write(handle, content.data(), content.size());
        if (written < 0 && errno == EINTR) continue;
        if (written < 0) {
            const int reason = errno;
            ::close(handle);
            errno = reason;
            refuse(path, "cannot write the file");
        }
        content.remove_prefix(static_cast<std::size_t>(written));
    }
    if (::fsync(handle) != 0 && errno != EINVAL && errno != EROFS) {
        const int reason = errno;
        ::close(handle);
        errno = reason;
        refuse(path, "cannot write the file");
    }
    if (::close(handle) != 0) refuse(path, "cannot write the file");
}

// Temporary files of one run, removed unless they were renamed.
struct Temporaries {
    std::vector<fs::path> paths;
    fs::path made_folder;  // first folder this run had to make; empty when there was none
    ~Temporaries() {
        std::error_code ignored;
        for (const fs::path& path : paths) fs::remove(path, ignored);
        if (!made_folder.empty()) fs::remove_all(made_folder, ignored);
    }
};

fs::path first_missing(const fs::path& folder) {
    fs::path missing;
    for (fs::path part = folder; !part.empty() && !fs::exists(part); part = part.parent_path()) {
        missing = part;
        if (part == part.parent_path()) break;
    }
    return missing;
}

}  // namespace

std::string read_file(const fs::path& path, std::size_t limit) {
    const auto fail = [&](const std::string& what, Blame blame) {
        return Error({.what = what, .accepted = {}, .path = {}, .file = path.string()}, blame);
    };
    std::error_code error;
    const fs::file_status status = fs::status(path, error);
    if (status.type() == fs::file_type::not_found) throw fail("no such file", Blame::input);
    if (error) throw fail("cannot read the file: " + error.message(), Blame::machine);
    if (status.type() == fs::file_type::directory) throw fail("is a folder, not a file", Blame::input);
    std::ifstream stream(path, std::ios::binary);
    if (!stream) throw fail(std::string("cannot read the file: ") + std::strerror(errno), Blame::machine);
    std::string content;
    const auto buffer = std::make_unique<char[]>(1u << 20);
    while (stream) {
        stream.read(buffer.get(), 1u << 20);
        content.append(buffer.get(), static_cast<std::size_t>(stream.gcount()));
        if (content.size() > limit)
            throw fail("is larger than the " + std::to_string(limit >> 20) + " MiB read here", Blame::input);
    }
    if (stream.bad()) throw fail("cannot read the file", Blame::machine);
    return content;
}

void write_files(const fs::path& folder, const std::vector<OutputFile>& files) {
    Temporaries temporaries;
    const fs::path whole = fs::absolute(folder).lexically_normal();
    std::error_code error;
    temporaries.made_folder = first_missing(whole);
    fs::create_directories(whole, error);
    if (error || !fs::is_directory(whole)) {
        const std::string why = error ? error.message() : "a file of that name is in the way";
        throw Error({.what = "cannot make the output folder: " + why,
                     .accepted = "a folder that can be written",
                     .path = {},
                     .file = folder.string()},
                    Blame::machine);
    }
    const std::string suffix = ".part-" + std::to_string(::getpid());
    for (const OutputFile& file : files) {
        temporaries.paths.push_back(whole / ("." + file.name + suffix));
        write_whole(temporaries.paths.back(), file.content);
    }
    for (std::size_t i = 0; i < files.size(); ++i) {
        fs::rename(temporaries.paths[i], whole / files[i].name, error);
        if (error) {
            errno = error.value();
            refuse(whole / files[i].name, "cannot put the file in place");
        }
    }
    temporaries.paths.clear();
    temporaries.made_folder.clear();
}

void write_file(const fs::path& path, std::string_view content) {
    const fs::path folder = path.has_parent_path() ? path.parent_path() : fs::path(".");
    write_files(folder, {{path.filename().string(), std::string(content)}});
}

}  // namespace glint
