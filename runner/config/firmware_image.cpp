#include "runner/config/firmware_image.hpp"

#include <cstdint>
#include <optional>

namespace halflsb {

namespace {

constexpr std::string_view magic =
    "\x7f"
    "ELF";
constexpr std::uint32_t program_note = 4, section_note = 7, gnu_build_id = 3;
constexpr std::uint64_t longest_build_id_bytes = 64;

/// Numbers of an ELF file at offsets that need not lie in it.
class ElfBytes {
public:
    ElfBytes(std::string_view bytes, bool is_64, bool is_big_endian)
        : bytes_(bytes), is_64_(is_64), is_big_endian_(is_big_endian) {}

    bool is_64() const { return is_64_; }
    std::uint64_t size() const { return bytes_.size(); }
    std::optional<std::uint64_t> number(std::uint64_t offset, unsigned size) const {
        if (offset > bytes_.size() || size > bytes_.size() - offset) return std::nullopt;
        std::uint64_t value = 0;
        for (unsigned i = 0; i < size; ++i) {
            const unsigned at = is_big_endian_ ? i : size - 1 - i;
            value = value << 8 | static_cast<unsigned char>(bytes_[static_cast<std::size_t>(offset) + at]);
        }
        return value;
    }
    /// An address or offset: 4 or 8 bytes.
    std::optional<std::uint64_t> word(std::uint64_t offset) const { return number(offset, is_64_ ? 8 : 4); }
    std::optional<std::string_view> part(std::uint64_t offset, std::uint64_t size) const {
        if (offset > bytes_.size() || size > bytes_.size() - offset) return std::nullopt;
        return bytes_.substr(static_cast<std::size_t>(offset), static_cast<std::size_t>(size));
    }

private:
    std::string_view bytes_;
    bool is_64_, is_big_endian_;
};

std::string hex(std::string_view bytes) {
    constexpr std::string_view digits = "0123456789abcdef";
    std::string text;
    for (const char c : bytes) {
        const auto byte = static_cast<unsigned char>(c);
        text += digits[byte >> 4];
        text += digits[byte & 15];
    }
    return text;
}

/// Notes are {name size, description size, type, name, description}, each padded to 4 bytes. They must lie in the file.
std::optional<std::string> build_id_in_notes(const ElfBytes& elf, std::uint64_t offset, std::uint64_t size) {
    const auto padded = [](std::uint64_t n) { return (n + 3) & ~std::uint64_t{3}; };
    const std::uint64_t end = offset + size;
    constexpr std::uint64_t header_bytes = 12;
    while (end - offset >= header_bytes) {
        const std::uint64_t name_bytes = *elf.number(offset, 4), id_bytes = *elf.number(offset + 4, 4),
                            type = *elf.number(offset + 8, 4);
        offset += header_bytes;
        if (padded(name_bytes) > end - offset || id_bytes > end - offset - padded(name_bytes)) return std::nullopt;
        const std::string_view name = *elf.part(offset, name_bytes);
        const std::string_view id = *elf.part(offset + padded(name_bytes), id_bytes);
        if (type == gnu_build_id && name == std::string_view("GNU\0", 4) && !id.empty() &&
            id_bytes <= longest_build_id_bytes)
            return hex(id);
        offset += padded(name_bytes);
        if (padded(id_bytes) > end - offset) return std::nullopt;
        offset += padded(id_bytes);
    }
    return std::nullopt;
}

/// A table of headers, program or section: where it is, and where in an entry its fields are.
struct HeaderTable {
    std::uint64_t table_offset_at, entry_size_at, count_at;  ///< in the file's header
    std::uint64_t type_at, offset_at, size_at;               ///< in an entry
    std::uint32_t note_type;
};

/// Whether the table itself lies in the file comes back in `is_whole`.
std::optional<std::string> build_id_in_table(const ElfBytes& elf, const HeaderTable& table, bool& is_whole) {
    const auto start = elf.word(table.table_offset_at), entry_size = elf.number(table.entry_size_at, 2),
               count = elf.number(table.count_at, 2);
    if (!start || !entry_size || !count) {
        is_whole = false;
        return std::nullopt;
    }
    if (*count > 0 && !elf.part(*start, *count * *entry_size)) {
        is_whole = false;
        return std::nullopt;
    }
    // Notes of one table do not overlap, so together they are no longer than the file: one that says otherwise would
    // have the same bytes searched up to 65535 times.
    std::uint64_t left_bytes = elf.size();
    for (std::uint64_t i = 0; i < *count; ++i) {
        const std::uint64_t entry = *start + i * *entry_size;
        if (elf.number(entry + table.type_at, 4) != table.note_type) continue;
        const auto offset = elf.word(entry + table.offset_at), size = elf.word(entry + table.size_at);
        if (!offset || !size || !elf.part(*offset, *size)) continue;
        if (*size > left_bytes) {
            is_whole = false;
            return std::nullopt;
        }
        left_bytes -= *size;
        if (auto id = build_id_in_notes(elf, *offset, *size)) return id;
    }
    return std::nullopt;
}

Error refused(std::string problem, std::string remedy) {
    return Error{ErrorKind::input, {}, std::move(problem), std::move(remedy)};
}

}  // namespace

Outcome<std::string> build_id_of(std::string_view elf_bytes) {
    constexpr std::string_view want_elf = "give the .elf file that the linker wrote, not a .bin or .hex made from it";
    if (!elf_bytes.starts_with(magic)) return refused("it is not an ELF file", std::string(want_elf));
    constexpr std::size_t identification_bytes = 16;
    const char width = elf_bytes.size() > 4 ? elf_bytes[4] : '\0', order = elf_bytes.size() > 5 ? elf_bytes[5] : '\0';
    if (elf_bytes.size() < identification_bytes || (width != 1 && width != 2) || (order != 1 && order != 2)) {
        return refused("its ELF header is damaged or cut off", std::string(want_elf));
    }
    const ElfBytes elf(elf_bytes, width == 2, order == 2);
    const HeaderTable segments =
        elf.is_64() ? HeaderTable{32, 54, 56, 0, 8, 32, program_note} : HeaderTable{28, 42, 44, 0, 4, 16, program_note};
    const HeaderTable sections = elf.is_64() ? HeaderTable{40, 58, 60, 4, 24, 32, section_note}
                                             : HeaderTable{32, 46, 48, 4, 16, 20, section_note};
    bool is_whole = true;
    if (auto id = build_id_in_table(elf, segments, is_whole)) return *id;
    if (auto id = build_id_in_table(elf, sections, is_whole)) return *id;
    if (!is_whole) return refused("its ELF headers are damaged or cut off", std::string(want_elf));
    return refused("it has no build-id note, so it cannot be told from another build", "link it with -Wl,--build-id");
}

Outcome<std::string> read_build_id(const std::string& path, const Files& files) {
    auto bytes = files.read(path, largest_image_bytes);
    if (!bytes) return bytes.error();
    auto id = build_id_of(*bytes);
    if (id) return id;
    Error error = id.error();
    error.place = path;
    return error;
}

}  // namespace halflsb
