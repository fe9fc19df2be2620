// Each message body of docs/wire.md: what decodes, encodes to the same bytes again.
#include "runner/wire/messages.hpp"

#include <algorithm>
#include <array>

#include "tests/fuzz/target.hpp"

using namespace halflsb;

namespace {

template <class Message>
void check(message::BytesView body) {
    const auto decoded = message::decode<Message>(body);
    if (!decoded) return;
    message::Bytes again;
    message::encode(*decoded, again);
    fuzz::require(std::equal(again.begin(), again.end(), body.begin(), body.end()), "encode(decode(body)) = body");
}

/// A rate cycle of 1 and 1 may be written or left out; encode leaves it out.
void check_filter_page(message::BytesView body) {
    constexpr std::array one_and_one{std::byte{1}, std::byte{0}, std::byte{1}, std::byte{0}};
    const auto page = message::decode<message::FilterPage>(body);
    if (page && page->up == 1 && page->down == 1 && body.size() > one_and_one.size()) {
        const message::BytesView head = body.first(body.size() - one_and_one.size());
        if (message::decode<message::FilterPage>(head)) {
            const message::BytesView tail = body.last(one_and_one.size());
            fuzz::require(std::ranges::equal(tail, one_and_one), "only 1 and 1 can be left out");
            body = head;
        }
    }
    check<message::FilterPage>(body);
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
    const message::BytesView body = fuzz::bytes_of(data, size);
    check<message::Hello>(body);
    check<message::Start>(body);
    check<message::Status>(body);
    check<message::Echo>(body);
    check<message::Samples>(body);
    check<message::Reset>(body);
    check<message::Set>(body);
    check<message::Load>(body);
    check<message::Select>(body);
    check<message::GreetingPage>(body);
    check<message::BoardPage>(body);
    check_filter_page(body);
    check<message::SettingPage>(body);
    check<message::Started>(body);
    check<message::Counters>(body);
    check<message::Response>(body);
    check<message::Done>(body);
    check<message::Expect>(body);
    check<message::Refused>(body);
    if (size > 0) {
        fuzz::require(!message::name_of(data[0]).empty(), "each type has a name");
        fuzz::require(!message::reason_text(data[0]).empty(), "each reason has a text");
    }
    return 0;
}
