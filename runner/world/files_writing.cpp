// The writing half of DiskFiles: beside the final name first, on the disk, then renamed.
#include <fcntl.h>
#include <sys/stat.h>

#include <cerrno>
#include <cstdio>
#include <cstring>
#include <memory>

#include "runner/world/file_descriptor.hpp"
#include "runner/world/files.hpp"

namespace halflsb {

namespace {

Error writing_error(const std::string& place, int number) {
    const auto error = [&](std::string problem, std::string remedy) {
        return Error{ErrorKind::output, place, std::move(problem), std::move(remedy)};
    };
    switch (number) {
        case EACCES:
        case EPERM:
            return error("no permission to write it",
                         "give this user the right to write there, or choose another folder with --out");
        case ENOSPC:
            return error("no space is left on its disk", "free some space, or choose another folder with --out");
        case EDQUOT:
            return error("the disk quota of this user is used up",
                         "free some space, or choose another folder with --out");
        case EROFS:
            return error("its file system is read-only", "choose another folder with --out");
        case ENOENT:
            return error("the folder it belongs in is gone", "was it removed during the run?");
        case ENOTDIR:
        case EEXIST:
            return error("a part of the path is not a folder", "choose another folder with --out");
        case EISDIR:
            return error("there is a folder of that name", "choose another folder with --out");
        default:
            return error("it cannot be written: " + std::string(std::strerror(number)),
                         "choose another folder with --out");
    }
}

Outcome<void> write_all(const std::string& place, int descriptor, std::span<const std::byte> bytes) {
    while (!bytes.empty()) {
        const ssize_t put = ::write(descriptor, bytes.data(), bytes.size());
        if (put < 0 && errno == EINTR) continue;
        if (put < 0) return writing_error(place, errno);
        bytes = bytes.subspan(static_cast<std::size_t>(put));
    }
    return {};
}

std::string folder_of(const std::string& path) {
    const std::size_t slash = path.rfind('/');
    if (slash == std::string::npos) return ".";
    return slash == 0 ? "/" : path.substr(0, slash);
}

class DiskOutputFile final : public OutputFile {
public:
    DiskOutputFile(std::string path, FileDescriptor file)
        : path_(std::move(path)), part_path_(path_ + ".part"), file_(std::move(file)) {}
    ~DiskOutputFile() override { discard(); }
    DiskOutputFile(const DiskOutputFile&) = delete;
    DiskOutputFile& operator=(const DiskOutputFile&) = delete;

    Outcome<void> write(std::span<const std::byte> bytes) override { return write_all(path_, file_.number(), bytes); }

    Outcome<void> patch_start(std::span<const std::byte> bytes) override {
        off_t offset = 0;
        while (!bytes.empty()) {
            const ssize_t put = pwrite(file_.number(), bytes.data(), bytes.size(), offset);
            if (put < 0 && errno == EINTR) continue;
            if (put < 0) return writing_error(path_, errno);
            offset += put;
            bytes = bytes.subspan(static_cast<std::size_t>(put));
        }
        return {};
    }

    Outcome<void> read_back(std::size_t offset, std::span<std::byte> bytes) override {
        while (!bytes.empty()) {
            const ssize_t got = pread(file_.number(), bytes.data(), bytes.size(), static_cast<off_t>(offset));
            if (got < 0 && errno == EINTR) continue;
            if (got < 0) return writing_error(path_, errno);
            if (got == 0) {
                return Error{ErrorKind::output, path_, "it is shorter than what was written to it",
                             "did something else write to it?"};
            }
            offset += static_cast<std::size_t>(got);
            bytes = bytes.subspan(static_cast<std::size_t>(got));
        }
        return {};
    }

    void rename(const std::string& path) override { path_ = path; }

    Outcome<void> commit() override {
        if (fsync(file_.number()) != 0 || file_.close_now() != 0 ||
            std::rename(part_path_.c_str(), path_.c_str()) != 0) {
            return writing_error(path_, errno);
        }
        done_ = true;
        // The new name must survive a power cut as well. Not every file system can be asked; the bytes are safe.
        const FileDescriptor folder(open(folder_of(path_).c_str(), O_RDONLY | O_DIRECTORY | O_CLOEXEC));
        if (folder.is_open()) (void)fsync(folder.number());
        return {};
    }

    void discard() override {
        file_.close_now();
        if (!done_) (void)std::remove(part_path_.c_str());
        done_ = true;
    }

private:
    std::string path_;
    std::string part_path_;  ///< until commit(), whatever the final name becomes
    FileDescriptor file_;
    bool done_ = false;
};

}  // namespace

Outcome<std::unique_ptr<OutputFile>> DiskFiles::open_output(const std::string& path) {
    struct stat facts {};
    if (stat(path.c_str(), &facts) == 0 && S_ISDIR(facts.st_mode)) return writing_error(path, EISDIR);
    // A part left by a crash is replaced; O_NOFOLLOW so that a link of that name is never written through.
    FileDescriptor file(open((path + ".part").c_str(),
                             O_RDWR | O_CREAT | O_TRUNC | O_NOFOLLOW | O_NONBLOCK | O_NOCTTY | O_CLOEXEC, 0666));
    if (!file.is_open()) return writing_error(path, errno);
    return std::unique_ptr<OutputFile>(std::make_unique<DiskOutputFile>(path, std::move(file)));
}

Outcome<void> DiskFiles::write(const std::string& path, std::span<const std::byte> bytes) {
    auto file = open_output(path);
    if (!file) return file.error();
    if (auto written = (*file)->write(bytes); !written) return written;
    return (*file)->commit();
}

Outcome<void> DiskFiles::make_directories(const std::string& path) {
    if (path.empty()) return writing_error(path, ENOENT);
    for (std::size_t end = path.find('/', 1);; end = path.find('/', end + 1)) {
        const std::string folder = path.substr(0, end);
        if (mkdir(folder.c_str(), 0777) != 0) {
            const int number = errno;
            struct stat facts {};
            if (stat(folder.c_str(), &facts) != 0) return writing_error(path, number);
            if (!S_ISDIR(facts.st_mode)) return writing_error(path, ENOTDIR);
        }
        if (end == std::string::npos) return {};
    }
}

}  // namespace halflsb
