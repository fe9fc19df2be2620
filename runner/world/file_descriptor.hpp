// An open file descriptor that closes itself.
#pragma once

#include <unistd.h>

#include <utility>

namespace halflsb {

class FileDescriptor {
public:
    explicit FileDescriptor(int number = -1) : number_(number) {}
    FileDescriptor(FileDescriptor&& other) noexcept : number_(std::exchange(other.number_, -1)) {}
    FileDescriptor& operator=(FileDescriptor&& other) noexcept {
        std::swap(number_, other.number_);
        return *this;
    }
    ~FileDescriptor() { close_now(); }

    bool is_open() const { return number_ >= 0; }
    int number() const { return number_; }
    /// Hands it on: the caller closes it.
    int release() { return std::exchange(number_, -1); }
    /// What close() said: the last chance of some file systems to report a lost write.
    int close_now() { return number_ < 0 ? 0 : ::close(std::exchange(number_, -1)); }

private:
    int number_;
};

}  // namespace halflsb
