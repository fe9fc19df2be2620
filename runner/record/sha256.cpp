#include "runner/record/sha256.hpp"

#include <sha2.h>
#include <sys/types.h>

#include <array>
#include <cerrno>
#include <cstdint>
#include <cstdio>
#include <cstring>
#include <memory>

namespace halflsb {

namespace {

constexpr std::size_t piece_bytes = 64 * 1024;

class Sha256 {
public:
    Sha256() { SHA256Init(&context_); }
    void add(const void* bytes, std::size_t count) {
        SHA256Update(&context_, static_cast<const std::uint8_t*>(bytes), count);
    }
    std::string hex() {
        std::array<std::uint8_t, SHA256_DIGEST_LENGTH> digest;
        SHA256Final(digest.data(), &context_);
        std::string text;
        for (const std::uint8_t byte : digest) {
            text += "0123456789abcdef"[byte >> 4];
            text += "0123456789abcdef"[byte & 15];
        }
        return text;
    }

private:
    SHA2_CTX context_;
};

Error reading_error(const std::string& path, int number) {
    return {ErrorKind::output, path, "cannot be read back after it was written: " + std::string(std::strerror(number)),
            "keep other programs away from the run's folder, or choose another with --out"};
}

}  // namespace

std::string sha256_of_text(std::string_view bytes) {
    Sha256 sha256;
    sha256.add(bytes.data(), bytes.size());
    return sha256.hex();
}

Outcome<std::string> sha256_of_file(const std::string& path) {
    const std::unique_ptr<std::FILE, int (*)(std::FILE*)> file(std::fopen(path.c_str(), "rbe"), &std::fclose);
    if (file == nullptr) return reading_error(path, errno);
    Sha256 sha256;
    std::array<char, piece_bytes> piece;
    errno = 0;
    while (const std::size_t got = std::fread(piece.data(), 1, piece.size(), file.get())) sha256.add(piece.data(), got);
    if (std::ferror(file.get()) != 0) return reading_error(path, errno);
    return sha256.hex();
}

}  // namespace halflsb
