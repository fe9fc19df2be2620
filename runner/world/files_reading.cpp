// The reading half of DiskFiles: regular files only, capped, and confined when the path comes from a plan.
#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include <array>
#include <cerrno>
#include <cstdlib>
#include <cstring>
#include <memory>
#include <string_view>

#include "runner/world/file_descriptor.hpp"
#include "runner/world/files.hpp"

namespace halflsb {

namespace {

// O_NONBLOCK so that a pipe which took the place of a file after it was looked at cannot hold us;
// O_NOCTTY so that a terminal cannot become ours.
constexpr int reading_flags = O_RDONLY | O_NONBLOCK | O_NOCTTY | O_CLOEXEC;

Error refused(const std::string& place, std::string problem, std::string remedy) {
    return Error{ErrorKind::input, place, std::move(problem), std::move(remedy)};
}

Error reading_error(const std::string& place, int number) {
    switch (number) {
        case ENOENT:
            return refused(place, "there is no such file", "check the path; it is taken from the current folder");
        case ENOTDIR:
            return refused(place, "a part of the path is not a folder", "check the path");
        case EACCES:
        case EPERM:
            return refused(place, "no permission to read it", "make it readable for this user");
        case ELOOP:
            return refused(place, "its symbolic links lead in a circle", "correct the links");
        case ENAMETOOLONG:
            return refused(place, "the path is too long", "use a shorter one");
        default:
            return refused(place, "it cannot be read: " + std::string(std::strerror(number)),
                           "read it by hand to find out more");
    }
}

std::string kind_of(mode_t mode) {
    if (S_ISDIR(mode)) return "a folder";
    if (S_ISFIFO(mode)) return "a pipe";
    if (S_ISCHR(mode) || S_ISBLK(mode)) return "a device";
    if (S_ISSOCK(mode)) return "a socket";
    return "not a file";
}

Outcome<void> check_regular(const std::string& place, const struct stat& facts, std::size_t cap_bytes) {
    if (!S_ISREG(facts.st_mode)) {
        return refused(place, "it is " + kind_of(facts.st_mode) + ", not a regular file", "name a regular file");
    }
    if (facts.st_size > 0 && static_cast<std::uintmax_t>(facts.st_size) > cap_bytes) {
        return refused(place,
                       "it has " + std::to_string(facts.st_size) + " bytes, the most allowed are " +
                           std::to_string(cap_bytes) + "; it was not read",
                       "is it the file that was meant?");
    }
    return {};
}

/// Everything behind the descriptor, which must be of a regular file.
Outcome<std::string> read_all(const std::string& place, const FileDescriptor& file, std::size_t cap_bytes) {
    struct stat facts {};
    if (fstat(file.number(), &facts) != 0) return reading_error(place, errno);
    if (auto regular = check_regular(place, facts, cap_bytes); !regular) return regular.error();
    std::string bytes;
    std::array<char, 65536> part{};
    for (;;) {
        const ssize_t got = ::read(file.number(), part.data(), part.size());
        if (got < 0 && errno == EINTR) continue;
        if (got < 0) return reading_error(place, errno);
        if (got == 0) return bytes;
        bytes.append(part.data(), static_cast<std::size_t>(got));
        // It may grow while it is read, and some file systems state no size.
        if (bytes.size() > cap_bytes) {
            return refused(place, "it has more than the " + std::to_string(cap_bytes) + " bytes allowed",
                           "is it the file that was meant?");
        }
    }
}

/// "../x", "a/../../x": above where it starts, as it is written. Told before anything is looked up, so that
/// a plan cannot even ask what exists outside the root.
bool climbs_out(std::string_view path) {
    int depth = 0;
    while (!path.empty()) {
        const std::size_t slash = path.find('/');
        const std::string_view part = path.substr(0, slash);
        if (part == "..") {
            if (--depth < 0) return true;
        } else if (!part.empty() && part != ".") {
            ++depth;
        }
        path = slash == std::string_view::npos ? std::string_view{} : path.substr(slash + 1);
    }
    return false;
}

/// The last part of a resolved path, opened part by part without following a link: what was resolved
/// and checked cannot be exchanged for a link in between.
Outcome<FileDescriptor> open_without_links(const std::string& place, const std::string& root, std::string_view inside,
                                           std::size_t cap_bytes) {
    FileDescriptor folder(open(root.c_str(), O_PATH | O_DIRECTORY | O_CLOEXEC));
    if (!folder.is_open()) return reading_error(place, errno);
    for (std::size_t slash = inside.find('/'); slash != std::string_view::npos; slash = inside.find('/')) {
        const std::string name(inside.substr(0, slash));
        FileDescriptor next(openat(folder.number(), name.c_str(), O_PATH | O_DIRECTORY | O_NOFOLLOW | O_CLOEXEC));
        if (!next.is_open()) return reading_error(place, errno);
        folder = std::move(next);
        inside.remove_prefix(slash + 1);
    }
    const std::string name(inside);
    struct stat facts {};
    if (fstatat(folder.number(), name.c_str(), &facts, AT_SYMLINK_NOFOLLOW) != 0) return reading_error(place, errno);
    if (auto regular = check_regular(place, facts, cap_bytes); !regular) return regular.error();
    FileDescriptor file(openat(folder.number(), name.c_str(), reading_flags | O_NOFOLLOW));
    if (!file.is_open()) return reading_error(place, errno);
    return file;
}

}  // namespace

Outcome<std::string> DiskFiles::read(const std::string& path, std::size_t cap_bytes) const {
    struct stat facts {};
    if (stat(path.c_str(), &facts) != 0) return reading_error(path, errno);
    if (auto regular = check_regular(path, facts, cap_bytes); !regular) return regular.error();
    const FileDescriptor file(open(path.c_str(), reading_flags));
    if (!file.is_open()) return reading_error(path, errno);
    return read_all(path, file, cap_bytes);
}

Outcome<std::string> DiskFiles::read_under_root(const std::string& root, const std::string& relative_path,
                                                std::size_t cap_bytes) const {
    const std::string place = root + "/" + relative_path;
    if (relative_path.empty()) return refused(place, "the path is empty", "name a file under the root " + root);
    if (relative_path.find('\0') != std::string::npos)
        return refused(root, "the path holds a NUL", "name a file under the root " + root);
    if (relative_path.front() == '/') {
        return refused(relative_path, "the path is absolute", "give it relative to the root " + root);
    }
    constexpr std::string_view outside_remedy = "move the file under the root, or give another --root";
    if (climbs_out(relative_path))
        return refused(place, "it lies outside the root " + root, std::string(outside_remedy));
    const std::string real_root = resolved(root);
    if (real_root.empty()) return refused(root, "there is no such folder", "give --root a folder that exists");
    const std::unique_ptr<char, void (*)(void*)> real(realpath((real_root + "/" + relative_path).c_str(), nullptr),
                                                      std::free);
    if (real == nullptr) {
        Error error = reading_error(place, errno);
        if (errno == ENOENT) error.remedy = "paths in a plan are taken from the root " + root;
        return error;
    }
    const std::string real_path = real.get();
    const std::string prefix = real_root == "/" ? real_root : real_root + "/";
    if (real_path == real_root) return refused(place, "it is a folder, not a regular file", "name a regular file");
    if (real_path.size() <= prefix.size() || real_path.compare(0, prefix.size(), prefix) != 0) {
        return refused(place, "it lies outside the root " + root + ", at " + real_path, std::string(outside_remedy));
    }
    auto file = open_without_links(place, real_root, std::string_view(real_path).substr(prefix.size()), cap_bytes);
    if (!file) return file.error();
    return read_all(place, *file, cap_bytes);
}

class DiskInputFile final : public InputFile {
public:
    DiskInputFile(std::string path, FileDescriptor file, std::int64_t size)
        : path_(std::move(path)), file_(std::move(file)), size_(size) {}
    std::int64_t size_bytes() const override { return size_; }
    Outcome<void> read(std::int64_t offset, std::span<std::byte> bytes) override {
        while (!bytes.empty()) {
            const ssize_t got = pread(file_.number(), bytes.data(), bytes.size(), offset);
            if (got < 0 && errno == EINTR) continue;
            if (got < 0) return reading_error(path_, errno);
            if (got == 0) return refused(path_, "it became shorter while it was read", "keep other programs away");
            bytes = bytes.subspan(static_cast<std::size_t>(got));
            offset += got;
        }
        return {};
    }

private:
    std::string path_;
    FileDescriptor file_;
    std::int64_t size_;
};

Outcome<std::unique_ptr<InputFile>> DiskFiles::open_input(const std::string& path) const {
    struct stat facts {};
    if (stat(path.c_str(), &facts) != 0) return reading_error(path, errno);
    if (auto regular = check_regular(path, facts, SIZE_MAX); !regular) return regular.error();
    FileDescriptor file(open(path.c_str(), reading_flags));
    if (!file.is_open()) return reading_error(path, errno);
    if (fstat(file.number(), &facts) != 0) return reading_error(path, errno);
    if (auto regular = check_regular(path, facts, SIZE_MAX); !regular) return regular.error();
    return std::unique_ptr<InputFile>(std::make_unique<DiskInputFile>(path, std::move(file), facts.st_size));
}

bool DiskFiles::exists(const std::string& path) const {
    struct stat facts {};
    return lstat(path.c_str(), &facts) == 0;
}

std::string DiskFiles::resolved(const std::string& path) const {
    const std::unique_ptr<char, void (*)(void*)> real(realpath(path.c_str(), nullptr), std::free);
    return real == nullptr ? std::string() : std::string(real.get());
}

}  // namespace halflsb
