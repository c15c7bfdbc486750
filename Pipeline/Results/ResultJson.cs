using System.Text.Json;
using System.Text.Json.Nodes;
using Pipeline.Analysis;
using Pipeline.Comparison;
using Pipeline.Fitting;

namespace Pipeline.Results;

/// <summary>result.json: what the night says of a run, for programs.</summary>
static class ResultJson
{
    /// <summary>Raised when a key changes its meaning or goes away; new keys do not raise it.</summary>
    const int SchemaVersion = 1;

    static readonly JsonSerializerOptions Indented = new() { WriteIndented = true, NewLine = "\n" };

    public static string Render(RunOutcome run) => new JsonObject
    {
        ["schema_version"] = SchemaVersion,
        ["run"] = run.Name,
        ["mode"] = run.Mode,
        ["conditions"] = new JsonObject(run.Conditions.Select(c => KeyValuePair.Create(c.Name, (JsonNode?)Condition(c)))),
        ["verdict"] = Verdict(run.Verdict),
        ["shots"] = Shots(run.Tally),
        ["remarks"] = List(run.Remarks),
        ["provenance"] = ProvenanceOf(run.Provenance),
    }.ToJsonString(Indented) + "\n";

    static JsonObject Condition(ConditionOutcome c) => new()
    {
        ["flight"] = c.Fit.Flight,
        ["molecules_per_shot"] = Quantity(c.Fit.Number),
        ["mean_velocity_m_per_s"] = Quantity(c.Fit.Mean),
        ["spread_m_per_s"] = Quantity(c.Fit.Spread),
        ["below_capture"] = Below(c.Fit.Below),
        ["others"] = new JsonObject(c.Fit.Others.Select(o =>
        {
            JsonObject quantity = Quantity(o.Quantity);
            quantity["unit"] = o.Unit;
            return KeyValuePair.Create(o.Name, (JsonNode?)quantity);
        })),
        ["estimators"] = new JsonObject(c.Fit.Spectra.Select(s => KeyValuePair.Create(s.Estimator, (JsonNode?)Estimator(s)))),
        ["yield_scatter"] = Number(c.Fit.YieldScatter),
        ["prediction"] = c.Prediction is not { } p ? null : new JsonObject
        {
            ["molecules_per_shot"] = Number(p.Molecules), ["mean_velocity_m_per_s"] = Number(p.MeanSpeed), ["below_capture_per_shot"] = Number(p.BelowCapture),
            ["effective_size"] = Number(p.EffectiveSize), ["rows_outside_acceptance"] = p.Outside, ["normalisation"] = c.RelativeOnly ? "relative" : "absolute",
        },
    };

    static JsonObject Estimator(VelocitySpectrum s) => new()
    {
        ["description"] = s.Description, ["deviance"] = Number(s.Deviance), ["degrees_of_freedom"] = Number(s.DegreesOfFreedom), ["doubt"] = s.Doubt,
        ["molecules_per_shot"] = Quantity(s.Number), ["mean_velocity_m_per_s"] = Quantity(s.Mean), ["spread_m_per_s"] = Quantity(s.Spread),
        ["parameters"] = new JsonArray([.. s.Parameters.Select(p => (JsonNode)new JsonObject
        {
            ["name"] = p.Name, ["unit"] = p.Unit, ["value"] = Number(p.Value), ["low"] = Number(p.Low), ["high"] = Number(p.High),
        })]),
        ["families"] = new JsonArray([.. s.Choices.Select(f => (JsonNode)new JsonObject
        {
            ["family"] = f.Family, ["deviance"] = Number(f.Deviance), ["parameters"] = Number(f.Parameters), ["criterion"] = Number(f.Criterion),
            ["chosen"] = f.Chosen, ["converged"] = f.Converged, ["trouble"] = f.Trouble,
        })]),
    };

    static JsonObject Quantity(Quantity q)
    {
        var json = new JsonObject { ["value"] = Number(q.Value), ["statistical"] = Number(q.Statistical), ["systematic"] = Number(q.Systematic) };
        if (q.NotDeterminedBecause is { } because) json["not_determined_because"] = because;
        if (q.Budget.Count > 0) json["budget"] = new JsonObject(q.Budget.Select(b => KeyValuePair.Create(b.Cause, (JsonNode?)Number(b.Shift))));
        return json;
    }

    static JsonObject Below(BelowCapture b)
    {
        var json = new JsonObject
        {
            ["capture_m_per_s"] = Number(b.CaptureSpeed), ["molecules_per_shot"] = Number(b.Value), ["low"] = Number(b.Interval?.Low ?? double.NaN),
            ["high"] = Number(b.Interval?.High ?? double.NaN), ["confidence"] = Number(b.Interval?.Confidence ?? double.NaN),
        };
        if (b.Rule.Length > 0) json["rule"] = b.Rule;
        if (b.Share is { } share) json["share"] = new JsonObject { ["low"] = Number(share.Low), ["high"] = Number(share.High) };
        if (b.Strict is { } strict) json["over_all_spectra"] = new JsonObject { ["low"] = Number(strict.Low), ["high"] = Number(strict.High) };
        if (b.NotDeterminedBecause is { } because) json["not_determined_because"] = because;
        return json;
    }

    static JsonObject Verdict(Verdict v) => new()
    {
        ["judgement"] = Word(v.Judgement),
        ["reasons"] = List(v.Reasons),
        ["questions"] = new JsonArray([.. v.Questions.Select(q => (JsonNode)new JsonObject
        {
            ["condition"] = q.Answer.Condition, ["question"] = q.Answer.Question, ["measured"] = Number(q.Answer.Measured),
            ["predicted"] = Number(q.Answer.Predicted), ["difference"] = Number(q.Answer.Difference), ["statistical"] = Number(q.Answer.Statistical),
            ["systematic"] = Number(q.Answer.Systematic), ["simulation"] = Number(q.Answer.Simulation), ["pull"] = Number(q.Answer.Pull),
            ["p_value"] = Number(q.Answer.PValue), ["p_value_adjusted"] = Number(q.AdjustedPValue), ["judgement"] = Word(q.Judgement), ["reason"] = q.Reason,
        })]),
    };

    static string Word(Judgement j) => j switch { Judgement.Agrees => "agrees", Judgement.Disagrees => "disagrees", _ => "undecided" };

    static JsonObject Shots(ShotTally tally) => new()
    {
        ["read"] = tally.Read,
        ["kept"] = new JsonArray([.. tally.Kept.Select(k => (JsonNode)new JsonObject { ["condition"] = k.Condition, ["kind"] = k.Kind.ToString(), ["shots"] = k.Shots })]),
        ["cut"] = new JsonArray([.. tally.Cuts.Select(c => (JsonNode)new JsonObject
        {
            ["reason"] = c.Reason, ["count"] = c.Numbers.Count, ["shots"] = new JsonArray([.. c.Numbers.Select(n => (JsonNode)n)]),
        })]),
    };

    static JsonObject ProvenanceOf(Provenance p) => new()
    {
        ["inputs"] = Files(p.Inputs), ["predictions"] = Files(p.Predictions), ["configuration_sha256"] = p.Configuration, ["program"] = p.Program,
        ["numerical_version"] = p.NumericalVersion, ["seed"] = p.Seed, ["reader"] = p.Reader,
    };

    static JsonArray Files(IReadOnlyList<InputFile> files) =>
        new([.. files.Select(f => (JsonNode)new JsonObject { ["file"] = f.Name, ["sha256"] = f.Sha256 })]);

    static JsonArray List(IEnumerable<string> texts) => new([.. texts.Select(t => (JsonNode)t)]);

    /// <summary>JSON knows no NaN: what is not determined is null.</summary>
    static JsonNode? Number(double value) => double.IsFinite(value) ? JsonValue.Create(value) : null;
}
