#include "runner/world/sha256.hpp"

#include <unistd.h>

#include <catch2/catch.hpp>
#include <cstdio>
#include <filesystem>
#include <fstream>
#include <string>

using namespace halflsb;

// The three messages of FIPS 180-2 appendix B and the empty one; their digests from memory of the
// standard (MEMORY), each checked against coreutils 9.1 `sha256sum` (COMPUTED).
TEST_CASE("sha256: the standard's example messages", "[record]") {
    CHECK(sha256_of_text("") == "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855");
    CHECK(sha256_of_text("abc") == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
    CHECK(sha256_of_text("abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq") ==
          "248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1");
    CHECK(sha256_of_text(std::string(1000000, 'a')) ==
          "cdc76e5c9914fb9281a1c7e284d73e67f1809a48a497200e046d39ccc7112cd0");
}

TEST_CASE("sha256: a file read in pieces gives the digest of its whole", "[record]") {
    const std::string path =
        (std::filesystem::temp_directory_path() / ("halflsb-sha256-" + std::to_string(::getpid()))).string();
    for (const std::size_t bytes :
         {std::size_t{0}, std::size_t{65535}, std::size_t{65536}, std::size_t{65537}, std::size_t{1000000}}) {
        std::ofstream(path, std::ios::binary | std::ios::trunc) << std::string(bytes, 'a');
        const auto digest = sha256_of_file(path);
        REQUIRE(digest);
        CHECK(*digest == sha256_of_text(std::string(bytes, 'a')));
    }
    std::filesystem::remove(path);
}

TEST_CASE("sha256: a file that cannot be read back is an output error that names it", "[record]") {
    const auto missing = sha256_of_file("/nowhere/at/all.npy");
    REQUIRE_FALSE(missing);
    CHECK(missing.error().kind == ErrorKind::output);
    CHECK(to_text(missing.error()) ==
          "/nowhere/at/all.npy: cannot be read back after it was written: No such file or directory\n"
          "  keep other programs away from the run's folder, or choose another with --out");
    CHECK_FALSE(sha256_of_file("/"));
}
