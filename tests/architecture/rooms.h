// The rooms, their order, and which outside headers each may include.
#ifndef STILLFIELD_TESTS_ARCHITECTURE_ROOMS_H_
#define STILLFIELD_TESTS_ARCHITECTURE_ROOMS_H_

#include <string>
#include <vector>

namespace stillfield::architecture {

// A room may include itself and the rooms before it.
const std::vector<std::string>& room_order();

// Place in room_order(), or -1 for a folder that is no room.
int room_place(const std::string& room);

// Rooms whose results decide the chain's bytes: no libm, no OpenCV.
bool on_the_chains_path(const std::string& room);

// Empty when `room` may include <header>, else the reason why not.
std::string outside_header_objection(const std::string& room, const std::string& header);

}  // namespace stillfield::architecture

#endif  // STILLFIELD_TESTS_ARCHITECTURE_ROOMS_H_
