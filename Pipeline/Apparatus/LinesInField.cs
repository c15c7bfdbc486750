using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>Lines of a species as they stand in a magnetic field.</summary>
static class LinesInField
{
    /// <summary>Shift of a line with g m = 1, Hz/T: 13.996 GHz/T.</summary>
    public const double HertzPerTesla = Codata.BohrMagneton / Codata.PlanckConstant;

    /// <param name="lines">Without field.</param>
    /// <param name="field">T; the sign is that of the axis along which m is counted.</param>
    /// <returns>Each line at offset + g m mu_B B/h; mixed lines as two of half the weight, to both sides.</returns>
    /// <remarks>Linear: the field is so weak that hyperfine levels do not mix. Order of the lines as without field.</remarks>
    public static IReadOnlyList<SpectralLine> Of(IReadOnlyList<SpectralLine> lines, double field) =>
        field == 0 ? lines : [.. lines.SelectMany(l => Of(l, (l.FieldFactor ?? 0) * HertzPerTesla * field))];

    static IEnumerable<SpectralLine> Of(SpectralLine line, double shift) => line.Mixed && shift != 0
        ? [line with { OffsetHz = line.OffsetHz - shift, Weight = 0.5 * line.Weight }, line with { OffsetHz = line.OffsetHz + shift, Weight = 0.5 * line.Weight }]
        : [line with { OffsetHz = line.OffsetHz + shift }];
}
