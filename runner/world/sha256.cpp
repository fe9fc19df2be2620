#include "runner/world/sha256.hpp"

#include <sha2.h>
#include <sys/types.h>

#include <array>
#include <cerrno>
#include <cstdint>
#include <cstdio>
#include <cstring>
#include <memory>
#include <vector>

#include "stimuli/npy.hpp"

namespace halflsb {

namespace {

constexpr std::size_t piece_bytes = 64 * 1024;

Error reading_error(const std::string& path, int number) {
    return {ErrorKind::output, path, "cannot be read back after it was written: " + std::string(std::strerror(number)),
            "keep other programs away from the run's folder, or choose another with --out"};
}

class Sha256OfCodes final : public CodeDigest {
public:
    void add(const SampleFormat& format, std::span<const Code> codes) override {
        bytes_.resize(codes.size() * bytes_of(npy_type_of(format)));
        to_npy_bytes(format, codes, bytes_);
        sha256_.add(bytes_);
    }
    std::string value() override { return sha256_.value(); }

private:
    Sha256 sha256_;
    std::vector<std::byte> bytes_;
};

}  // namespace

struct Sha256::Context {
    SHA2_CTX state;
};

Sha256::Sha256() : context_(std::make_unique<Context>()) { SHA256Init(&context_->state); }
Sha256::Sha256(Sha256&&) noexcept = default;
Sha256& Sha256::operator=(Sha256&&) noexcept = default;
Sha256::~Sha256() = default;

void Sha256::add(std::span<const std::byte> bytes) {
    SHA256Update(&context_->state, reinterpret_cast<const std::uint8_t*>(bytes.data()), bytes.size());
}

std::string Sha256::value() {
    std::array<std::uint8_t, SHA256_DIGEST_LENGTH> digest;
    SHA256Final(digest.data(), &context_->state);
    std::string text;
    for (const std::uint8_t byte : digest) {
        text += "0123456789abcdef"[byte >> 4];
        text += "0123456789abcdef"[byte & 15];
    }
    return text;
}

std::unique_ptr<CodeDigest> make_code_digest() { return std::make_unique<Sha256OfCodes>(); }

std::string sha256_of_text(std::string_view bytes) {
    Sha256 sha256;
    sha256.add(std::as_bytes(std::span(bytes)));
    return sha256.value();
}

Outcome<std::string> sha256_of_file(const std::string& path) {
    const std::unique_ptr<std::FILE, int (*)(std::FILE*)> file(std::fopen(path.c_str(), "rbe"), &std::fclose);
    if (file == nullptr) return reading_error(path, errno);
    Sha256 sha256;
    std::array<std::byte, piece_bytes> piece;
    errno = 0;
    while (const std::size_t got = std::fread(piece.data(), 1, piece.size(), file.get()))
        sha256.add(std::span(piece).first(got));
    if (std::ferror(file.get()) != 0) return reading_error(path, errno);
    return sha256.value();
}

}  // namespace halflsb
