// SHA-256 (FIPS 180-4) in 64 lower-case hexadecimal digits: ties a record to the bytes it was made
// from.
#pragma once

#include <cstddef>
#include <memory>
#include <span>
#include <string>
#include <string_view>

#include "oracle/rules/accepted_response.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

/// A running hash; value() once, at the end.
class Sha256 {
public:
    Sha256();
    Sha256(Sha256&&) noexcept;
    Sha256& operator=(Sha256&&) noexcept;
    ~Sha256();
    void add(std::span<const std::byte> bytes);
    std::string value();

private:
    struct Context;
    std::unique_ptr<Context> context_;
};

/// Over the codes as the data of an NPY file holds them.
std::unique_ptr<CodeDigest> make_code_digest();

std::string sha256_of_text(std::string_view bytes);

/// Of a file, read in pieces of constant size. An Error is of kind output, its place the path: only
/// files that a run has just written are hashed this way.
Outcome<std::string> sha256_of_file(const std::string& path);

}  // namespace halflsb
