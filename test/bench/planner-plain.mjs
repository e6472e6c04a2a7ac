// The planner's frontier search written plainly, with lists of bins and a function for everything: a yardstick for speed.

const kept = ({ coulombic, lossPerW }, W) => (W > 0 ? W * coulombic : W) - W * W * lossPerW

/** A straight line through the entries of a row. */
function along(row, { from, step }, at) {
  const x = Math.min(Math.max((at - from) / step, 0), row.length - 1)
  const i = Math.min(Math.floor(x), row.length - 2)
  return row[i] + (row[i + 1] - row[i]) * (x - i)
}

/** The cubic of Catmull and Rom through the entries of a row. */
function smooth(row, { from, step }, at) {
  const x = Math.min(Math.max((at - from) / step, 0), row.length - 1)
  const i = Math.min(Math.floor(x), row.length - 2)
  const [b, c] = [row[i], row[i + 1]]
  const a = i > 0 ? row[i - 1] : 2 * b - c
  const d = i + 2 < row.length ? row[i + 2] : 2 * c - b
  const u = x - i
  return b + 0.5 * u * (c - a + u * (2 * a - 5 * b + 4 * c - d + u * (3 * (b - c) + d - a)))
}

function cubicBetween(a, b, c, d, u) {
  const value = b + u * (c - a / 3 - b / 2 - d / 6 + u * ((a + c) / 2 - b + u * ((b - c) / 2 + (d - a) / 6)))
  return Math.min(Math.max(value, Math.min(b, c)), Math.max(b, c))
}

/** Energy of a layer at an instant behind bin j; undefined where it cannot be reached. */
function between({ bins, knot }, j, at) {
  const [a, b, c, d] = [j - 1, j, j + 1, j + 2].map((k) => (bins[k] && bins[k].t >= knot.t ? bins[k].E : undefined))
  if (c === undefined) return b !== undefined && at - bins[j].t < 1e-6 ? b : undefined
  if (b === undefined) {
    const share = Math.max(at - knot.t, 0) / (bins[j + 1].t - knot.t)
    return knot.E + (c - knot.E) * share
  }
  const u = (at - bins[j].t) / (bins[j + 1].t - bins[j].t)
  return a === undefined || d === undefined ? b + (c - b) * u : cubicBetween(a, b, c, d, u)
}

/** The earliest end of a day by the frontier alone. [s] */
export function plainEarliestEnd(day, stepS, stepMps) {
  const times = []
  for (let t = day.start.atS; t <= day.latestS + 1e-9; t += stepS) times.push(t)
  const row = (table, i, count) => Array.from(table.subarray(i * count, (i + 1) * count))
  const ceiling = day.pack.ceilingJ
  const indexOf = (t) => Math.floor((t - day.start.atS) / stepS + 1e-9)
  const at = (layer, t) => (t < layer.knot.t - 1e-6 ? undefined : between(layer, indexOf(t), t))

  function waited(layer, sun, floor) {
    let last = layer.knot
    for (const bin of layer.bins) {
      if (bin.t < layer.knot.t - 1e-6) continue
      const E =
        last.E + kept(day.pack, along(sun, day.clock, (last.t + bin.t) / 2) - day.waitingLoadW) * (bin.t - last.t)
      const held = Math.min(E, ceiling)
      if (held >= floor && !(bin.E >= held)) bin.E = held
      if (bin.E === undefined) break
      last = bin
    }
    return layer
  }

  function throughStop(layer, stop) {
    const leave = (t) => t + along([...stop.lengthS], day.clock, t)
    const gain = (E, t) => Math.min(E + along([...stop.gainJ], day.clock, t), ceiling)
    const knot = { t: leave(layer.knot.t), E: gain(layer.knot.E, layer.knot.t) }
    const bins = times.map((t) => {
      let [low, high] = [layer.knot.t, t]
      if (leave(low) > t + 1e-6) return { t }
      for (let n = 0; n < 40; n++) {
        const middle = (low + high) / 2
        if (leave(middle) <= t) low = middle
        else high = middle
      }
      const E = low <= stop.closesS ? at(layer, low) : undefined
      return E === undefined ? { t } : { t, E: gain(E, low) }
    })
    return { knot, bins }
  }

  function alongPiece(layer, i) {
    const sun = row(day.harvestW, i, day.clock.count)
    const loads = row(day.loadW, i, day.speeds.count)
    const fastest = day.fastestMps[i]
    const slowest = Math.min(day.slowestMps, fastest)
    const timeOf = (v) => day.lengthM[i] / v + day.extraS[i]
    const driven = (t, v) => {
      const s = timeOf(v)
      const E = at(layer, t - s)
      if (E === undefined) return undefined
      return E + kept(day.pack, along(sun, day.clock, t - s / 2) - smooth(loads, day.speeds, v)) * s - day.extraJ[i]
    }
    const speeds = [fastest]
    for (let v = slowest; v < fastest - 1e-9; v += stepMps) speeds.push(v)
    const best = (t) => {
      const fromKnot = day.lengthM[i] / (t - layer.knot.t - day.extraS[i])
      const tried = fromKnot > slowest && fromKnot < fastest ? [...speeds, fromKnot] : speeds
      return tried.reduce((most, v) => {
        const E = driven(t, v)
        return E !== undefined && !(most >= E) ? E : most
      }, undefined)
    }
    const floor = day.floorJ[i + 1]
    const bins = times.map((t) => {
      const E = best(t)
      return E === undefined || E < floor ? { t } : { t, E: Math.min(E, ceiling) }
    })
    let t = layer.knot.t + timeOf(fastest)
    let E = driven(t, fastest)
    const first = bins.find((bin) => bin.E !== undefined)
    if (!(E >= floor)) {
      if (first === undefined) return null
      let [low, high] = [t, first.t]
      E = first.E
      for (let n = 0; n < 40; n++) {
        const middle = (low + high) / 2
        const tried = best(middle)
        if (tried >= floor) [high, E] = [middle, tried]
        else low = middle
      }
      t = high
    }
    return { knot: { t, E: Math.min(E, ceiling) }, bins }
  }

  const sunAt = (i) => row(day.harvestW, Math.min(i, day.pieces - 1), day.clock.count)
  let layer = { knot: { t: day.start.atS, E: day.start.energyJ }, bins: times.map((t) => ({ t })) }
  waited(layer, sunAt(0), -Infinity)
  for (let i = 0; i <= day.pieces; i++) {
    for (const stop of day.stops.filter((one) => one.beforePiece === i))
      layer = waited(throughStop(layer, stop), sunAt(i), day.floorJ[i])
    if (i === day.pieces) break
    const next = alongPiece(layer, i)
    if (next === null) return Infinity
    layer = waited(next, sunAt(i + 1), day.floorJ[i + 1])
  }
  const dusk = [...day.duskGainJ]
  const holds = (t) => {
    const E = at(layer, t)
    return E >= day.floorJ[day.pieces] && Math.min(E + along(dusk, day.clock, t), ceiling) >= day.targetJ
  }
  let low = layer.knot.t
  if (holds(low)) return low
  let high = times.find((t) => t > low && holds(t))
  if (high === undefined) return Infinity
  low = Math.max(low, high - stepS)
  for (let n = 0; n < 50; n++) {
    const middle = (low + high) / 2
    if (holds(middle)) high = middle
    else low = middle
  }
  return high
}
