#!/usr/bin/env python3
"""A device for Tautbook in Python: streams a recording file over the device link, as a rig's own program would.

    python3 client.py --url ws://127.0.0.1:4680 --key KEY --rig heron-8 --revision 1 RECORDING.csv[.gz]

Needs msgpack and websockets (Debian: python3-msgpack, python3-websockets). Waits to be armed, or with --unfiled begins at
once. What is not acknowledged is kept and sent again after a break. README.md beside this file describes the link.

A rig's program takes `Device` as it is and feeds `samples` from its own loop. It is a recorder: it stops nothing and
protects nobody.
"""
import argparse
import asyncio
import csv
import gzip
import struct
import sys
import time
import uuid

import msgpack
import websockets

BATCH = 25  # samples; about 40 frames a second at 1 kHz


def monotonic_us() -> int:
    """The device's own clock: any origin, never set back."""
    return time.monotonic_ns() // 1000


class Run:
    """One run: its batches, numbered, kept until they are durable."""

    def __init__(self, trial, start_us):
        self.name, self.trial, self.start_us = uuid.uuid4().hex, trial, start_us
        self.batches, self.durable, self.sent = [], 0, 0
        self.samples, self.reason, self.begun, self.ended = 0, None, False, False

    def add(self, first, times_us, columns):
        """times_us since the run's start; columns: channel after channel, a list of floats each (NaN: not measured)."""
        count = len(times_us)
        t0 = times_us[0]
        self.batches.append({
            "type": "batch", "run": self.name, "n": len(self.batches), "first": first, "count": count, "t0Us": self.start_us + t0,
            "dtUs": struct.pack(f"<{count}I", *(round(t - t0) for t in times_us)),
            "data": b"".join(struct.pack(f"<{count}f", *column) for column in columns),
        })
        self.samples += count


class Device:
    """One device on the link. `armed` is called with a trial when the server arms one, `stopped` when it asks to stop."""

    def __init__(self, url, key, rig, revision, rate_hz, channels, firmware="client.py"):
        self.url, self.key = url.rstrip("/") + "/link/v1", key
        self.hello = {"type": "hello", "link": 1, "rig": {"code": rig, "revision": revision}, "rateHz": rate_hz, "channels": channels, "firmware": firmware}
        self.run, self.unacked, self.socket = None, 16, None
        self.armed, self.stopped = asyncio.Event(), asyncio.Event()
        self.trial, self.news = None, asyncio.Event()

    async def serve(self):
        """Connects, and connects again after a break, until the run is closed."""
        wait = 0.2
        while self.run is None or not self.run.ended:
            try:
                async with websockets.connect(self.url, subprotocols=["tautbook.link.v1"], extra_headers={"Authorization": f"Bearer {self.key}"}, max_size=None) as socket:
                    self.socket = socket
                    await self.send({**self.hello, "deviceUs": monotonic_us()})
                    wait = 0.2
                    async for frame in socket:
                        await self.hear(msgpack.unpackb(frame))
                        await self.pump()
            except websockets.InvalidStatusCode as refused:
                if refused.status_code in (401, 403, 426):
                    raise SystemExit(f"The server refused the device: status {refused.status_code}. Check its key.")
            except (OSError, websockets.WebSocketException, asyncio.IncompleteReadError):
                pass
            self.socket = None
            if self.run:
                self.run.begun, self.run.sent = False, self.run.durable
            await asyncio.sleep(wait)
            wait = min(5.0, wait * 2)

    async def send(self, message):
        """False when the line is down: `serve` sees that too, and sends again from what is durable."""
        socket = self.socket
        if socket is None:
            return False
        try:
            await socket.send(msgpack.packb(message))
            return True
        except websockets.ConnectionClosed:
            return False

    async def hear(self, message):
        kind, run = message["type"], self.run
        if kind == "clock":
            await self.send({"type": "clock", "id": message["id"], "deviceUs": monotonic_us()})
        elif kind == "welcome":
            self.unacked = message["limits"]["unacked"]
            for known in message["resume"]:
                if run and known["run"] == run.name:
                    run.begun, run.durable = True, known["next"]
                    run.sent = run.durable
            if run and not run.begun:
                await self.begin()
        elif kind == "arm":
            self.trial = message["trial"]
            self.armed.set()
        elif kind == "disarm":
            self.armed.clear()
        elif kind == "stop":
            self.stopped.set()
        elif kind == "pace":
            self.unacked = message["unacked"]
        elif kind == "ack" and run and message["run"] == run.name:
            run.begun, run.durable = True, max(run.durable, message["next"])
            run.sent = max(run.sent, run.durable)
            run.ended = run.ended or message.get("ended", False)
            if run.ended:
                await self.socket.close()
        elif kind == "fault":
            print(f"{message['code']}: {message['message']}", file=sys.stderr)
            if message["code"] == "BATCH_ORDER" and run:
                run.sent = message["n"]
            elif message["code"] == "RUN_CLOSED" and run:
                run.ended = True
                await self.socket.close()
            elif message["fatal"]:
                raise SystemExit(f"The server ended the link: {message['code']}.")
        self.news.set()

    async def begin(self):
        await self.send({"type": "begin", "trial": self.run.trial, "run": self.run.name, "startUs": self.run.start_us})

    async def pump(self):
        """Sends what may be in flight now, and the end once every batch is on its way."""
        run = self.run
        if self.socket is None or run is None or not run.begun:
            return
        while run.begun and run.sent < len(run.batches) and run.sent - run.durable < self.unacked:
            # Taken before it is sent: the link and the rig's loop both come here, and neither may step over a batch.
            batch = run.batches[run.sent]
            run.sent += 1
            if not await self.send(batch):
                return
        if run.reason and run.sent == len(run.batches):
            await self.send({"type": "end", "run": run.name, "batches": len(run.batches), "samples": run.samples, "reason": run.reason})

    async def start(self, trial):
        self.run = Run(trial, monotonic_us())
        if self.socket is not None:
            await self.begin()
        return self.run


def read_recording(path):
    opened = gzip.open(path, "rt", newline="") if path.endswith(".gz") else open(path, newline="")
    with opened as lines:
        rows = csv.reader(lines)
        channels = next(rows)[1:]
        table = [[float(field or "nan") for field in row] for row in rows]
    return channels, table


def pieces(table, rate):
    """Rows for a batch each: at most BATCH, and none with a gap inside."""
    part = []
    for row in table:
        if part and (len(part) == BATCH or row[0] - part[-1][0] > 1.5 / rate):
            yield part
            part = []
        part.append(row)
    if part:
        yield part


async def main():
    options = argparse.ArgumentParser(description="Streams a recording file to Tautbook as a device.")
    options.add_argument("recording")
    options.add_argument("--url", required=True)
    options.add_argument("--key", required=True)
    options.add_argument("--rig", required=True)
    options.add_argument("--revision", type=int, default=1)
    options.add_argument("--unfiled", action="store_true", help="begin at once, without an armed trial")
    options.add_argument("--fast", action="store_true", help="as fast as the server takes it, not in real time")
    given = options.parse_args()
    channels, table = read_recording(given.recording)
    rate = round(1 / sorted(b[0] - a[0] for a, b in zip(table, table[1:]))[len(table) // 2 - 1], 3)

    device = Device(given.url, given.key, given.rig, given.revision, rate, channels)
    link = asyncio.ensure_future(device.serve())
    if not given.unfiled:
        await asyncio.wait([asyncio.ensure_future(device.armed.wait()), link], return_when=asyncio.FIRST_COMPLETED)
    run = await device.start(None if given.unfiled else device.trial)
    begun = time.monotonic()
    for part in pieces(table, rate):
        if not given.fast:
            await asyncio.sleep(max(0.0, begun + part[-1][0] - table[0][0] - time.monotonic()))
        if device.stopped.is_set() or link.done():
            break
        # A hole in the file's times is a gap: `first` steps over the samples that are missing.
        firsts = round((part[0][0] - table[0][0]) * rate)
        run.add(max(firsts, run.batches[-1]["first"] + run.batches[-1]["count"] if run.batches else 0), [(row[0] - table[0][0]) * 1e6 for row in part], list(zip(*part))[1:])
        await device.pump()
        if given.fast:
            await asyncio.sleep(0)
    run.reason = "stopped" if device.stopped.is_set() else "done"
    await device.pump()
    await link
    print(f"{run.samples} samples in {len(run.batches)} batches are in the book as run {run.name}.")


if __name__ == "__main__":
    asyncio.run(main())
