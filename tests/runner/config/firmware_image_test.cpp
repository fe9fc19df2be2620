#include "runner/config/firmware_image.hpp"

#include <catch2/catch.hpp>

#include "tests/support/fake_files.hpp"

using namespace halflsb;

namespace {

struct Elf {
    bool is_64 = false, is_big_endian = false;
    bool by_section = false;  ///< the note is found by a section header, not by a program header
    std::string notes;

    std::string number(std::uint64_t value, unsigned bytes) const {
        std::string text;
        for (unsigned i = 0; i < bytes; ++i) {
            const unsigned shift = 8 * (is_big_endian ? bytes - 1 - i : i);
            text += static_cast<char>(value >> shift & 0xFF);
        }
        return text;
    }
    std::string note(const std::string& name, std::uint64_t type, const std::string& description) const {
        const auto padded = [](std::string text) { return text + std::string((4 - text.size() % 4) % 4, '\0'); };
        return number(name.size(), 4) + number(description.size(), 4) + number(type, 4) + padded(name) +
               padded(description);
    }
    std::string word(std::uint64_t value) const { return number(value, is_64 ? 8 : 4); }
    std::uint64_t header_bytes() const { return is_64 ? 64 : 52; }

    /// Header, one table entry, the notes.
    std::string bytes() const {
        const std::uint64_t entry_bytes = by_section ? (is_64 ? 64 : 40) : (is_64 ? 56 : 32);
        const std::uint64_t notes_at = header_bytes() + entry_bytes;
        std::string text = std::string(
                               "\x7f"
                               "ELF") +
                           static_cast<char>(is_64 ? 2 : 1) + static_cast<char>(is_big_endian ? 2 : 1) + '\x01' +
                           std::string(9, '\0');
        text += number(2, 2) + number(40, 2) + number(1, 4) + word(0);
        text += word(by_section ? 0 : header_bytes()) + word(by_section ? header_bytes() : 0) + number(0, 4);
        text += number(header_bytes(), 2) + number(by_section ? 0 : entry_bytes, 2) + number(by_section ? 0 : 1, 2);
        text += number(by_section ? entry_bytes : 0, 2) + number(by_section ? 1 : 0, 2) + number(0, 2);
        if (by_section) {
            text += number(0, 4) + number(7, 4) + word(0) + word(0) + word(notes_at) + word(notes.size());
            text += std::string(static_cast<std::size_t>(notes_at) - text.size(), '\0');
        } else if (is_64) {
            text += number(4, 4) + number(4, 4) + word(notes_at) + word(0) + word(0) + word(notes.size()) + word(0) +
                    word(4);
        } else {
            text += number(4, 4) + word(notes_at) + word(0) + word(0) + word(notes.size()) + word(0) + number(4, 4) +
                    word(4);
        }
        return text + notes;
    }
};

const std::string id_bytes = std::string("\x01\x23\x45\x67\x89\xab\xcd\xef\x00\xff", 10);
const std::string gnu = std::string("GNU\0", 4);

Elf elf_with_id(bool is_64, bool is_big_endian, bool by_section) {
    Elf elf{is_64, is_big_endian, by_section, {}};
    elf.notes =
        elf.note(std::string("stapsdt\0", 8), 3, "odd") + elf.note(gnu, 1, "abcdefgh") + elf.note(gnu, 3, id_bytes);
    return elf;
}

}  // namespace

TEST_CASE("firmware image: the build-id is found in every kind of ELF, among other notes", "[config]") {
    for (int kind = 0; kind < 8; ++kind) {
        INFO(kind);
        const auto id = build_id_of(elf_with_id((kind & 1) != 0, (kind & 2) != 0, (kind & 4) != 0).bytes());
        REQUIRE(id);
        CHECK(*id == "0123456789abcdef00ff");
    }
}

TEST_CASE("firmware image: what is no ELF, or has no note, is told", "[config]") {
    const auto said = [](const std::string& bytes) {
        const auto id = build_id_of(bytes);
        REQUIRE(!id);
        CHECK(id.error().kind == ErrorKind::input);
        return id.error().problem + "; " + id.error().remedy;
    };
    const std::string want_elf = "; give the .elf file that the linker wrote, not a .bin or .hex made from it";
    CHECK(said("") == "it is not an ELF file" + want_elf);
    CHECK(said(":10000000") == "it is not an ELF file" + want_elf);
    CHECK(said("\x7f"
               "ELF") == "its ELF header is damaged or cut off" + want_elf);
    CHECK(said("\x7f"
               "ELF\x05\x01" +
               std::string(100, '\0')) == "its ELF header is damaged or cut off" + want_elf);
    Elf elf = elf_with_id(false, false, false);
    CHECK(said(elf.bytes().substr(0, 30)) == "its ELF headers are damaged or cut off" + want_elf);
    elf.notes = elf.note(gnu, 1, "abcd");
    const std::string no_note =
        "it has no build-id note, so it cannot be told from another build; link it with -Wl,--build-id";
    CHECK(said(elf.bytes()) == no_note);
    elf.notes = elf.note(std::string("ABC\0", 4), 3, id_bytes);
    CHECK(said(elf.bytes()) == no_note);
    elf.notes = elf.note(gnu, 3, "");
    CHECK(said(elf.bytes()) == no_note);
}

TEST_CASE("firmware image: no damage is read out of bounds", "[config]") {
    for (int kind = 0; kind < 8; ++kind) {
        const std::string good = elf_with_id((kind & 1) != 0, (kind & 2) != 0, (kind & 4) != 0).bytes();
        for (std::size_t length = 0; length < good.size(); ++length) {
            const auto id = build_id_of(good.substr(0, length));
            CHECK((!id || *id == "0123456789abcdef00ff"));
        }
        for (std::size_t at = 0; at < good.size(); ++at) {
            for (const char value : {'\x00', '\x7f', '\xff'}) {
                std::string bad = good;
                bad[at] = value;
                (void)build_id_of(bad);  // the sanitizers watch
            }
        }
    }
}

TEST_CASE("firmware image: a table whose notes overlap is damaged, and not searched for minutes", "[config]") {
    Elf elf{true, false, true, std::string(std::size_t{4} << 20, '\0')};
    std::string bytes = elf.bytes();
    bytes.replace(58, 4, std::string("\0\0\xff\xff", 4));  // 65535 sections of 0 bytes: each is the first one
    const auto id = build_id_of(bytes);
    REQUIRE(!id);
    CHECK(id.error().problem == "its ELF headers are damaged or cut off");
}

TEST_CASE("firmware image: the file is named", "[config]") {
    FakeFiles files;
    files.contents["fw.elf"] = elf_with_id(false, false, false).bytes();
    files.contents["fw.bin"] = "x";
    CHECK(read_build_id("fw.elf", files).value() == "0123456789abcdef00ff");
    CHECK(to_text(read_build_id("fw.bin", files).error()) ==
          "fw.bin: it is not an ELF file\n  give the .elf file that the linker wrote, not a .bin or .hex made from it");
    CHECK(read_build_id("none.elf", files).error().problem == "there is no such file");
}
