#include "rigs/virtual-board/board.hpp"

#include <elf.h>
#include <link.h>

#include <array>
#include <cstring>
#include <utility>

#include "rigs/virtual-board/paced_line.hpp"

namespace halflsb::board {

namespace {

// The kit's functions carry no context, as in a firmware: what they act on is global.
struct State {
    std::vector<std::unique_ptr<OfferedFilter>> filters;
    std::vector<halflsb_filter> offered;
    halflsb_setting average{};
    AverageSetting* average_setting = nullptr;
    std::int32_t unread_points = 0;
    halflsb_board board{};
    std::vector<std::uint8_t> build_id, written;
    std::string serial;
    std::uint64_t blocks = 0, samples = 0, resets = 0;
    std::string running_filter;
};
State state;

template <std::size_t number>
struct Row {
    static void reset() {
        ++state.resets;
        state.running_filter = state.filters[number]->parts().name;
        state.filters[number]->reset();
    }
    static void process(const void* in, void* out, std::uint16_t count) {
        ++state.blocks;
        state.samples += count;
        state.filters[number]->process(in, out, count);
    }
    static std::uint16_t process_rate(const void* in, void* out, std::uint16_t count) {
        ++state.blocks;
        state.samples += count;
        return state.filters[number]->process_rate(in, out, count);
    }
    static int load(std::uint8_t table, std::uint16_t offset, const std::int32_t* values, std::uint8_t count) {
        return state.filters[number]->load(table, offset, values, count) ? 1 : 0;
    }
    static halflsb_filter offer() {
        const FilterParts& parts = state.filters[number]->parts();
        const auto channels = static_cast<std::uint8_t>(parts.channel_count());
        return {parts.name.c_str(),
                HALFLSB_CALL,
                parts.format,
                parts.format,
                channels,
                channels,
                parts.tables,
                reset,
                process,
                load,
                parts.up,
                parts.down,
                parts.process_rate ? process_rate : nullptr};
    }
};

template <std::size_t... numbers>
halflsb_filter offer(std::size_t number, std::index_sequence<numbers...>) {
    constexpr std::array<halflsb_filter (*)(), sizeof...(numbers)> offers = {Row<numbers>::offer...};
    return offers[number]();
}

std::uint32_t ticks() { return static_cast<std::uint32_t>(now_ns() & 0xFFFFFFFF); }

void write(const std::uint8_t* bytes, std::size_t count) {
    state.written.insert(state.written.end(), bytes, bytes + count);
}

int build_id_of(dl_phdr_info* image, std::size_t, void* to) {
    for (int i = 0; i < image->dlpi_phnum; ++i) {
        if (image->dlpi_phdr[i].p_type != PT_NOTE) continue;
        const auto* at = reinterpret_cast<const char*>(image->dlpi_addr + image->dlpi_phdr[i].p_vaddr);
        const char* end = at + image->dlpi_phdr[i].p_memsz;
        while (at + sizeof(ElfW(Nhdr)) <= end) {
            ElfW(Nhdr) note;
            std::memcpy(&note, at, sizeof note);
            const char* name = at + sizeof note;
            const char* value = name + (note.n_namesz + 3u) / 4u * 4u;
            if (note.n_type == NT_GNU_BUILD_ID && note.n_namesz == 4 && std::memcmp(name, "GNU", 4) == 0) {
                static_cast<std::vector<std::uint8_t>*>(to)->assign(value, value + note.n_descsz);
                return 1;
            }
            at = value + (note.n_descsz + 3u) / 4u * 4u;
        }
    }
    return 1;  // the first image is the program itself; the others are libraries
}

}  // namespace

Board::Board(const Options& options, std::vector<FilterParts> chosen, AverageSetting& average, const Faults& faults) {
    for (FilterParts& parts : chosen)
        state.filters.push_back(std::make_unique<OfferedFilter>(std::move(parts), faults));
    for (std::size_t i = 0; i < state.filters.size(); ++i) {
        state.offered.push_back(offer(i, std::make_index_sequence<most_filters>{}));
    }
    if (options.build_id) {
        state.build_id = *options.build_id;
    } else {
        dl_iterate_phdr(build_id_of, &state.build_id);
    }
    if (faults.line.wrong_build_id) {
        if (state.build_id.empty()) state.build_id.resize(20);
        for (std::uint8_t& byte : state.build_id) byte = static_cast<std::uint8_t>(~byte);
    }
    state.serial = options.serial;
    state.average_setting = &average;
    state.average = {"average-points", 1, average_points_most, &average.points,
                     [] { state.average_setting->changed(); }};
    if (faults.settings_ignored) {
        state.unread_points = average.points;
        state.average.value = &state.unread_points;
        state.average.changed = nullptr;
    }
    state.board.build_id = state.build_id.data();
    state.board.build_id_bytes = static_cast<std::uint8_t>(state.build_id.size());
    state.board.serial = state.serial.c_str();
    state.board.filters = state.offered.data();
    state.board.filter_count = static_cast<std::uint8_t>(state.offered.size());
    state.board.settings = &state.average;
    state.board.setting_count = 1;
    state.board.tick_hz = 1'000'000'000;
    state.board.tick_bits = 32;
    state.board.ticks = ticks;
    state.board.write = write;
    state.board.block_samples = options.block_samples;
    state.board.credit_blocks = options.credit_blocks;
}

Board::~Board() { state = State{}; }

void Board::start() { halflsb_start(&state.board); }

void Board::receive(const std::uint8_t* bytes, std::size_t count) {
    for (const std::uint8_t* end = bytes + count; bytes != end; ++bytes) halflsb_receive_byte(*bytes);
}

bool Board::poll() { return halflsb_poll() != 0; }
std::vector<std::uint8_t>& Board::written() { return state.written; }
std::uint64_t Board::blocks() const { return state.blocks; }
std::uint64_t Board::samples() const { return state.samples; }
std::uint64_t Board::resets() const { return state.resets; }
const std::string& Board::running_filter() const { return state.running_filter; }

}  // namespace halflsb::board
