// A board by docs/wire.md, for tests of the host: written from that page alone, sharing no code with
// runner/wire or rigs/kit, slow and plain. Its filters pass samples through, sum them up (a sum shows
// every sample that was lost, repeated or computed twice) or average them, each channel by itself. One that changes the
// rate returns with one of each `down` samples, and that one is followed by up - 1 zeros.
#pragma once

#include <cstdint>
#include <deque>
#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "tests/support/fake_link.hpp"
#include "tests/support/model_words.hpp"

namespace halflsb::test {

class ModelBoard final : public Peer {
public:
    /// average: the mean of the last 16 samples, or as many as setting 0 says where there is one; ties go up.
    enum class Work { pass, sum, average };
    struct Filter {
        std::string name = "pass";
        Work work = Work::pass;
        int injection = 0, input = 1, output = 1;  ///< bytes of the wire
        int channels_in = 1, channels_out = 1, nodes = 0, tables = 0;
        int up = 1, down = 1, phase = 0;  ///< the phase is no part of the greeting
    };
    struct Setting {
        std::string name;
        std::int32_t minimum, maximum, value;
    };

    int protocol = 1;
    Bytes build_id{std::byte{0xAB}, std::byte{0xCD}, std::byte{0x01}};
    std::string serial = "CW7-0042";
    std::vector<Filter> filters{Filter{}, Filter{"sum", Work::sum}};
    std::vector<Setting> settings;
    int max_block_samples = 256, credit_blocks = 4;
    std::uint32_t tick_hz = 168'000'000;
    int tick_bits = 32;
    std::optional<int> pages_said;  ///< instead of the right number
    std::optional<int> credit_said_at_start, block_said_at_start;
    /// May answer a frame in the board's place: true when it did. It gets the type, the body, and where to put frames.
    std::function<bool(std::uint8_t, const Bytes&, Bytes&)> instead;

    // What happened.
    std::int64_t processed_samples = 0, processed_blocks = 0, resets = 0;
    std::vector<std::pair<std::string, std::int32_t>> settings_made;  ///< by SET, in order
    std::uint32_t frames_bad = 0, gaps = 0, resent = 0;
    std::int64_t starts = 0;

    /// Power off and on. Settings are as they were when it was first started.
    void restart() {
        if (!settings_at_power_up_.empty()) settings = settings_at_power_up_;
        open_ = false;
        kept_.clear();
        frame_.clear();
        stream_nonce_.reset();
        frames_bad = gaps = resent = 0;
    }

    Bytes receive(std::span<const std::byte> bytes) override {
        Bytes out;
        for (const std::byte byte : bytes) {
            if (byte != std::byte{0}) {
                frame_.push_back(static_cast<std::uint8_t>(byte));
                continue;
            }
            if (frame_.empty()) continue;
            const auto content = decoded(frame_);
            frame_.clear();
            if (content)
                handle(*content, out);
            else
                ++frames_bad;
        }
        return out;
    }

    /// A frame as a board sends it: for tests that say something of their own.
    static Bytes frame(std::uint8_t type, const std::vector<std::uint8_t>& body) {
        std::vector<std::uint8_t> content{type};
        content.insert(content.end(), body.begin(), body.end());
        const std::uint32_t crc = crc_of(content);
        for (int k = 0; k < 4; ++k) content.push_back(static_cast<std::uint8_t>(crc >> (8 * k)));
        // Group after group: each is its length and up to 254 bytes without a zero.
        Bytes out;
        std::vector<std::uint8_t> group;
        const auto flush = [&] {
            out.push_back(static_cast<std::byte>(group.size() + 1));
            for (const std::uint8_t b : group) out.push_back(std::byte{b});
            group.clear();
        };
        for (std::size_t k = 0; k < content.size(); ++k) {
            if (content[k] == 0) {
                flush();
            } else {
                group.push_back(content[k]);
                if (group.size() == 254) flush();
            }
        }
        flush();
        out.push_back(std::byte{0});
        return out;
    }

    static std::uint64_t number(const Bytes& body, std::size_t at, std::size_t bytes) {
        std::uint64_t value = 0;
        for (std::size_t k = 0; k < bytes && at + k < body.size(); ++k)
            value |= static_cast<std::uint64_t>(body[at + k]) << (8 * k);
        return value;
    }
    static void put(std::vector<std::uint8_t>& body, std::uint64_t value, std::size_t bytes) {
        for (std::size_t k = 0; k < bytes; ++k) body.push_back(static_cast<std::uint8_t>(value >> (8 * k)));
    }
    static void say(Bytes& out, std::uint8_t type, const std::vector<std::uint8_t>& body) {
        const Bytes bytes = frame(type, body);
        out.insert(out.end(), bytes.begin(), bytes.end());
    }

private:
    static std::uint32_t crc_of(const std::vector<std::uint8_t>& bytes) {
        static const std::vector<std::uint32_t> table = [] {
            std::vector<std::uint32_t> entries;
            for (std::uint32_t entry = 0; entry < 256; ++entry) {
                std::uint32_t value = entry;
                for (int k = 0; k < 8; ++k) value = (value & 1) != 0 ? (value >> 1) ^ 0xEDB88320U : value >> 1;
                entries.push_back(value);
            }
            return entries;
        }();
        std::uint32_t crc = 0xFFFFFFFF;
        for (const std::uint8_t byte : bytes) crc = (crc >> 8) ^ table[(crc ^ byte) & 0xFF];
        return ~crc;
    }

    static std::optional<Bytes> decoded(const std::vector<std::uint8_t>& frame) {
        std::vector<std::uint8_t> content;
        for (std::size_t at = 0; at < frame.size();) {
            const std::size_t length = frame[at];
            if (at + length > frame.size()) return std::nullopt;
            content.insert(content.end(), frame.begin() + static_cast<std::ptrdiff_t>(at + 1),
                           frame.begin() + static_cast<std::ptrdiff_t>(at + length));
            at += length;
            if (length < 255 && at < frame.size()) content.push_back(0);
        }
        if (content.size() < 5) return std::nullopt;
        std::uint32_t crc = 0;
        for (std::size_t k = 0; k < 4; ++k)
            crc |= static_cast<std::uint32_t>(content[content.size() - 4 + k]) << (8 * k);
        content.resize(content.size() - 4);
        if (crc_of(content) != crc) return std::nullopt;
        Bytes bytes;
        for (const std::uint8_t byte : content) bytes.push_back(std::byte{byte});
        return bytes;
    }

    void refuse(Bytes& out, std::uint8_t type, std::uint64_t low16, int reason) {
        std::vector<std::uint8_t> body{type};
        put(body, low16 & 0xFFFF, 2);
        put(body, static_cast<std::uint64_t>(reason), 1);
        say(out, 0xFF, body);
    }

    void handle(const Bytes& content, Bytes& out) {
        const auto type = static_cast<std::uint8_t>(content[0]);
        const Bytes body(content.begin() + 1, content.end());
        if (instead && instead(type, body, out)) return;
        switch (type) {
            case 0x01:
                return greet(body, out);
            case 0x02:
                return start(body, out);
            case 0x03:
                return count(body, out);
            case 0x10:
            case 0x11:
            case 0x12:
                return stream(type, body, out);
            default:
                return refuse(out, type, number(body, 0, 2), type < 0x10 || type > 0x1F ? 1 : 6);
        }
    }

    static void text(std::vector<std::uint8_t>& page, const std::string& content) {
        page.push_back(static_cast<std::uint8_t>(content.size()));
        for (const char c : content) page.push_back(static_cast<std::uint8_t>(c));
    }

    void greet(const Bytes& body, Bytes& out) {
        const std::size_t page = number(body, 4, 1), pages = 1 + filters.size() + settings.size();
        std::vector<std::uint8_t> answer;
        put(answer, number(body, 0, 4), 4);
        put(answer, page, 1);
        put(answer, static_cast<std::uint64_t>(pages_said.value_or(static_cast<int>(pages))), 1);
        const auto byte = [&](int value) { put(answer, static_cast<std::uint64_t>(value), 1); };
        if (page == 0) {
            byte(protocol);
            byte(static_cast<int>(build_id.size()));
            for (const std::byte b : build_id) answer.push_back(static_cast<std::uint8_t>(b));
            text(answer, serial);
            byte(static_cast<int>(filters.size()));
            byte(static_cast<int>(settings.size()));
            put(answer, static_cast<std::uint64_t>(max_block_samples), 2);
            byte(credit_blocks);
            put(answer, tick_hz, 4);
            byte(tick_bits);
        } else if (page <= filters.size()) {
            const Filter& filter = filters[page - 1];
            text(answer, filter.name);
            for (const int value : {filter.injection, filter.input, filter.output, filter.channels_in,
                                    filter.channels_out, filter.nodes, filter.tables})
                byte(value);
            if (filter.up != 1 || filter.down != 1) {
                put(answer, static_cast<std::uint64_t>(filter.up), 2);
                put(answer, static_cast<std::uint64_t>(filter.down), 2);
            }
        } else if (page < pages) {
            const Setting& setting = settings[page - 1 - filters.size()];
            text(answer, setting.name);
            for (const std::int32_t value : {setting.minimum, setting.maximum, setting.value})
                put(answer, static_cast<std::uint32_t>(value), 4);
        } else {
            return refuse(out, 0x01, number(body, 0, 2), 5);
        }
        say(out, 0x81, answer);
    }

    void start(const Bytes& body, Bytes& out) {
        const auto nonce = static_cast<std::uint32_t>(number(body, 0, 4));
        const std::size_t filter = number(body, 4, 1);
        if (filter >= filters.size()) return refuse(out, 0x02, nonce, 4);
        if (stream_nonce_ != nonce) {
            ++starts;
            open_ = true;
            stream_nonce_ = nonce;
            filter_ = filters[filter];
            block_ = number(body, 5, 2);
            expected_ = 0;
            at_ = 0;
            clear();
            expect_said_ = false;
            kept_.clear();
        }
        std::vector<std::uint8_t> answer;
        put(answer, nonce, 4);
        put(answer, static_cast<std::uint64_t>(block_said_at_start.value_or(static_cast<int>(block_))), 2);
        put(answer, static_cast<std::uint64_t>(credit_said_at_start.value_or(credit_blocks)), 1);
        say(out, 0x82, answer);
    }

    void count(const Bytes& body, Bytes& out) {
        std::vector<std::uint8_t> answer;
        put(answer, number(body, 0, 4), 4);
        for (const std::uint64_t value : {std::uint64_t{frames_bad}, std::uint64_t{0}, std::uint64_t{gaps},
                                          std::uint64_t{resent}, static_cast<std::uint64_t>(processed_blocks)})
            put(answer, value, 4);
        say(out, 0x83, answer);
    }

    void stream(std::uint8_t type, const Bytes& body, Bytes& out) {
        const auto seq = static_cast<std::uint16_t>(number(body, 0, 2));
        if (!open_) return refuse(out, type, seq, 2);
        if (seq != expected_) {
            const auto back = static_cast<std::uint16_t>(expected_ - seq);
            if (back >= 1 && back <= kept_.size()) {
                const Bytes& answer = kept_[kept_.size() - back];
                out.insert(out.end(), answer.begin(), answer.end());
                ++resent;
            } else if (!expect_said_) {
                ++gaps;
                expect_said_ = true;
                std::vector<std::uint8_t> answer;
                put(answer, expected_, 2);
                say(out, 0x92, answer);
            }
            return;
        }
        std::vector<std::uint8_t> answer;
        put(answer, seq, 2);
        if (type != 0x10) {
            if (number(body, 2, 8) != at_) return refuse(out, type, seq, 3);
            if (type == 0x12 && number(body, 10, 1) >= settings.size()) return refuse(out, type, seq, 4);
            if (type == 0x12 && !set(number(body, 10, 1), static_cast<std::int32_t>(number(body, 11, 4))))
                return refuse(out, type, seq, 5);
            if (type == 0x11) {
                clear();
                ++resets;
            }
            put(answer, at_, 8);
        } else if (!respond(body, answer)) {
            return refuse(out, type, seq, 5);
        }
        const Bytes whole = frame(type == 0x10 ? 0x90 : 0x91, answer);
        kept_.push_back(whole);
        if (static_cast<int>(kept_.size()) > credit_said_at_start.value_or(credit_blocks)) kept_.pop_front();
        ++expected_;
        expect_said_ = false;
        out.insert(out.end(), whole.begin(), whole.end());
    }

    bool set(std::size_t number, std::int32_t value) {
        if (value < settings[number].minimum || value > settings[number].maximum) return false;
        if (settings_at_power_up_.empty()) settings_at_power_up_ = settings;
        settings[number].value = value;
        settings_made.emplace_back(settings[number].name, value);
        return true;
    }

    void clear() {
        sum_ = 0;
        since_clear_ = 0;
        past_.assign(static_cast<std::size_t>(filter_.channels_out), {});
    }

    bool respond(const Bytes& body, std::vector<std::uint8_t>& answer) {
        const ModelWords in(filter_.input), out(filter_.output);
        const std::size_t instant = in.bytes() * static_cast<std::size_t>(filter_.channels_in);
        const std::size_t count = (body.size() - 2) / instant;
        if (count < 1 || count > block_ || (body.size() - 2) % instant != 0) return false;
        std::vector<std::uint8_t> bytes;
        for (const std::byte byte : body) bytes.push_back(std::to_integer<std::uint8_t>(byte));
        put(answer, 100 * count, 4);
        put(answer, 107, 3);
        for (std::size_t n = 0; n < count; ++n) {
            const bool returns = since_clear_++ % filter_.down == filter_.phase;
            for (int c = 0; c < filter_.channels_out; ++c) {
                const std::size_t from =
                    2 + n * instant + static_cast<std::size_t>(c % filter_.channels_in) * in.bytes();
                const std::int64_t value = worked(static_cast<std::size_t>(c), in.read(bytes, from) - in.zero());
                if (returns) out.write(answer, out.zero() + value);
            }
            for (int zero = 0; returns && zero < (filter_.up - 1) * filter_.channels_out; ++zero)
                out.write(answer, out.zero());
        }
        at_ += count;
        processed_samples += static_cast<std::int64_t>(count);
        ++processed_blocks;
        return true;
    }

    std::int64_t worked(std::size_t channel, std::int64_t value) {
        switch (filter_.work) {
            case Work::pass:
                return value;
            case Work::sum:
                return sum_ += value;
            case Work::average:
                break;
        }
        const std::int64_t points = settings.empty() ? 16 : settings[0].value;
        std::deque<std::int64_t>& past = past_[channel];
        past.push_front(value);
        past.resize(64, 0);
        std::int64_t sum = 0;
        for (std::int64_t k = 0; k < points; ++k) sum += past[static_cast<std::size_t>(k)];
        const std::int64_t twice = 2 * sum + points;  // floor(sum / points + 1/2)
        return twice / (2 * points) - (twice % (2 * points) < 0 ? 1 : 0);
    }

    std::vector<std::uint8_t> frame_;
    bool open_ = false;
    std::optional<std::uint32_t> stream_nonce_;
    Filter filter_;
    std::uint64_t block_ = 0, at_ = 0;
    std::int64_t sum_ = 0, since_clear_ = 0;
    std::vector<std::deque<std::int64_t>> past_;  ///< of each channel, the newest first
    std::vector<Setting> settings_at_power_up_;
    std::uint16_t expected_ = 0;
    bool expect_said_ = false;
    std::deque<Bytes> kept_;
};

}  // namespace halflsb::test
