// Files in memory that remember what was asked of them, and fail on request.
#pragma once

#include <algorithm>
#include <map>
#include <memory>
#include <optional>
#include <set>
#include <string>
#include <utility>
#include <vector>

#include "runner/world/files.hpp"

namespace halflsb {

class FakeFiles final : public Files {
public:
    using Files::write;

    std::map<std::string, std::string> contents;  ///< by path, as given; "." and ".." are not followed
    std::set<std::string> folders;
    mutable std::vector<std::string> read_paths;  ///< in order
    std::vector<std::string> written_paths;       ///< in order, when committed
    std::map<std::string, Error> read_failures;   ///< by path
    std::optional<Error> write_failure;           ///< of every write once `writes_before_failure` went well
    int writes_before_failure = 0;

    Outcome<std::string> read(const std::string& path, std::size_t cap_bytes) const override {
        read_paths.push_back(path);
        if (const auto failure = read_failures.find(path); failure != read_failures.end()) return failure->second;
        const auto found = contents.find(path);
        if (found == contents.end())
            return Error{ErrorKind::input, path, "there is no such file",
                         "check the path; it is taken from the current folder"};
        if (found->second.size() > cap_bytes) {
            return Error{ErrorKind::input, path,
                         "it has " + std::to_string(found->second.size()) + " bytes, the most allowed are " +
                             std::to_string(cap_bytes) + "; it was not read",
                         "is it the file that was meant?"};
        }
        return found->second;
    }
    Outcome<std::string> read_under_root(const std::string& root, const std::string& relative_path,
                                         std::size_t cap_bytes) const override {
        if (relative_path.starts_with("/") || relative_path.find("..") != std::string::npos) {
            return Error{ErrorKind::input, relative_path, "it lies outside the root " + root,
                         "move the file under the root, or give another --root"};
        }
        const std::string path = root + "/" + relative_path;
        auto bytes = read(path, cap_bytes);
        if (bytes || contents.count(path) > 0 || read_failures.count(path) > 0) return bytes;
        Error error = bytes.error();
        error.remedy = "paths in a plan are taken from the root " + root;
        return error;
    }
    Outcome<std::unique_ptr<InputFile>> open_input(const std::string& path) const override {
        auto bytes = read(path, SIZE_MAX);
        if (!bytes) return bytes.error();
        return std::unique_ptr<InputFile>(std::make_unique<FakeInputFile>(path, std::move(*bytes)));
    }
    bool exists(const std::string& path) const override { return contents.count(path) + folders.count(path) > 0; }
    /// Of a folder with "/." behind it too; a folder is there when something lies in it.
    std::string resolved(const std::string& path) const override {
        if (!path.ends_with("/.")) return exists(path) ? path : std::string();
        const std::string folder = path.substr(0, path.size() - 2);
        const auto inside = contents.lower_bound(folder + "/");
        const bool is_there = inside != contents.end() && inside->first.starts_with(folder + "/");
        return is_there || folders.count(folder) > 0 ? folder : std::string();
    }

    Outcome<void> write(const std::string& path, std::span<const std::byte> bytes) override {
        auto file = open_output(path);
        if (!file) return file.error();
        if (auto written = (*file)->write(bytes); !written) return written;
        return (*file)->commit();
    }
    Outcome<void> make_directories(const std::string& path) override {
        if (auto failed = fail_when_asked(); !failed) return failed;
        folders.insert(path);
        return {};
    }
    Outcome<std::unique_ptr<OutputFile>> open_output(const std::string& path) override {
        if (auto failed = fail_when_asked(); !failed) return failed.error();
        contents[path + ".part"] = {};
        return std::unique_ptr<OutputFile>(std::make_unique<FakeOutputFile>(*this, path));
    }

private:
    class FakeInputFile final : public InputFile {
    public:
        FakeInputFile(std::string path, std::string bytes) : path_(std::move(path)), bytes_(std::move(bytes)) {}
        std::int64_t size_bytes() const override { return static_cast<std::int64_t>(bytes_.size()); }
        Outcome<void> read(std::int64_t offset, std::span<std::byte> bytes) override {
            const auto from = static_cast<std::size_t>(offset);
            if (from + bytes.size() > bytes_.size())
                return Error{ErrorKind::input, path_, "it became shorter while it was read", ""};
            const auto part = std::as_bytes(std::span(bytes_)).subspan(from, bytes.size());
            std::copy(part.begin(), part.end(), bytes.begin());
            return {};
        }

    private:
        std::string path_, bytes_;
    };

    class FakeOutputFile final : public OutputFile {
    public:
        FakeOutputFile(FakeFiles& files, std::string path)
            : files_(files), path_(std::move(path)), part_path_(path_ + ".part") {}
        ~FakeOutputFile() override { discard(); }
        FakeOutputFile(const FakeOutputFile&) = delete;
        FakeOutputFile& operator=(const FakeOutputFile&) = delete;

        Outcome<void> write(std::span<const std::byte> bytes) override {
            if (auto failed = files_.fail_when_asked(); !failed) return failed;
            part().append(reinterpret_cast<const char*>(bytes.data()), bytes.size());
            return {};
        }
        Outcome<void> patch_start(std::span<const std::byte> bytes) override {
            if (auto failed = files_.fail_when_asked(); !failed) return failed;
            part().replace(0, bytes.size(), reinterpret_cast<const char*>(bytes.data()), bytes.size());
            return {};
        }
        Outcome<void> read_back(std::size_t offset, std::span<std::byte> bytes) override {
            if (offset + bytes.size() > part().size())
                return Error{ErrorKind::output, path_, "it is shorter than what was written to it", ""};
            const auto from = std::as_bytes(std::span(part())).subspan(offset, bytes.size());
            std::copy(from.begin(), from.end(), bytes.begin());
            return {};
        }
        void rename(const std::string& path) override { path_ = path; }
        Outcome<void> commit() override {
            if (auto failed = files_.fail_when_asked(); !failed) return failed;
            files_.contents[path_] = part();
            files_.contents.erase(part_path_);
            files_.written_paths.push_back(path_);
            done_ = true;
            return {};
        }
        void discard() override {
            if (!done_) files_.contents.erase(part_path_);
            done_ = true;
        }

    private:
        std::string& part() { return files_.contents[part_path_]; }

        FakeFiles& files_;
        std::string path_, part_path_;
        bool done_ = false;
    };

    Outcome<void> fail_when_asked() {
        if (write_failure && writes_before_failure-- <= 0) return *write_failure;
        return {};
    }
};

}  // namespace halflsb
