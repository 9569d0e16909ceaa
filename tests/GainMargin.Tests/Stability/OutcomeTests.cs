using GainMargin.Tests.Published;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Stability;

/// <summary>Every outcome that a boundary can express, from real input.</summary>
public sealed class OutcomeTests
{
    [Fact]
    public void Run_NegativeRateGain_FlutterRestabilising()
    {
        var boundary = GainSweep.Run(Boundaries.Flutter());

        var onset = Assert.Single(boundary.Onsets);
        Assert.Equal(OnsetKind.Flutter, onset.Kind);
        Assert.Equal(CrossingDirection.Restabilising, onset.Direction);
        Assert.Equal(-0.1, onset.Gain, 1e-14);
        Assert.Equal(1, onset.Frequency.Radians, 1e-14);
        Assert.Equal(-0.5, onset.GrowthRateSlope!.Value, 1e-12);
        Assert.Equal((2, 0), (onset.Below.Growing, onset.Above.Growing));
        Assert.Equal([StabilityVerdict.Unstable, StabilityVerdict.Stable], boundary.Intervals.Select(i => i.Inside));
        Assert.Equal(StabilityVerdict.Marginal, boundary.Intervals[0].AtTo);
        Assert.Equal(StabilityVerdict.Marginal, boundary.VerdictAt(onset.Gain));
    }

    [Fact]
    public void Run_NegativeStiffness_DivergenceDestabilising()
    {
        var onset = Assert.Single(GainSweep.Run(Boundaries.Divergence()).Onsets);

        Assert.Equal(OnsetKind.Divergence, onset.Kind);
        Assert.Equal(CrossingDirection.Destabilising, onset.Direction);
        Assert.Equal(1, onset.Gain, 1e-14);
        Assert.Equal(0, onset.Frequency.Radians);
        Assert.Equal(10, onset.GrowthRateSlope!.Value, 1e-10);
    }

    [Fact]
    public void Run_UndampedNegativeStiffness_SlopeIsUnbounded()
        => Assert.Null(Assert.Single(GainSweep.Run(
            Boundaries.Path(Boundaries.One(1, 0, 1), Boundaries.Loop("g", "x", "x", new() { Position = -1 }, 0.5), 0, 2)).Onsets).GrowthRateSlope);

    // (1 + g)s² + 0.1s + 1: stable just above −1, one growing root just below.
    [Fact]
    public void Run_AccelerationFeedback_RootThroughInfinity()
    {
        var boundary = GainSweep.Run(Boundaries.ThroughInfinity());

        var onset = Assert.Single(boundary.Onsets);
        Assert.Equal(OnsetKind.ThroughInfinity, onset.Kind);
        Assert.Equal(-1, onset.Gain, 1e-13);
        Assert.True(onset.Frequency.IsUnlimited);
        Assert.Equal((1, 0), (onset.Below.Growing, onset.Above.Growing));
        Assert.Equal(StabilityVerdict.Undecided, boundary.Intervals[0].AtTo);
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.ThroughInfinity);
    }

    /// <summary>
    /// Two masses on their own: g takes the stiffness of the first and the damping of the second to zero at the same gain.
    /// </summary>
    [Fact]
    public void Run_FlutterAtTheGainOfADivergence_BothReported()
    {
        var structure = ElasticStructure.FromRowMajor(["x", "y"], [1, 0, 0, 1], [0.1, 0, 0, 0.5], [0.5, 0, 0, 9]);
        var law = ControlLaw.Of(
            Boundaries.Loop("k", "x", "x", new() { Position = -1 }, 1), Boundaries.Loop("d", "y", "y", new() { Rate = -1 }, 1));
        var boundary = GainSweep.Run(GainPath.CommonFactor(ClosedLoop.Create(structure, law), GainRange.Between(0.1, 2)));

        Assert.Equal([OnsetKind.Divergence, OnsetKind.Flutter], boundary.Onsets.Select(o => o.Kind).Order(Comparer<OnsetKind>.Create((a, b) => b.CompareTo(a))));
        Assert.All(boundary.Onsets, o => Assert.Equal(0.5, o.Gain, 1e-12));
        Assert.All(boundary.Onsets, o => Assert.Equal((0, 3), (o.Below.Growing, o.Above.Growing)));
        string text = boundary.ToString();
        Assert.Contains(": divergence,", text, StringComparison.Ordinal);
        Assert.Contains(": flutter at 3 rad", text, StringComparison.Ordinal);
    }

    // (1 + g)s² + 0.1s + 1 screened from the very gain at which the mass vanishes.
    [Fact]
    public void Run_RangeEndsWhereARootIsAtInfinity_NothingClaimedAtThatEnd()
    {
        var boundary = GainSweep.Run(Boundaries.Path(Boundaries.One(1, 0.1, 1), Boundaries.Loop("g", "x", "x", new() { Acceleration = 1 }, 0.5), -1, 1));

        Assert.Empty(boundary.Onsets);
        Assert.Equal(StabilityVerdict.Undecided, boundary.Intervals[0].AtFrom);
        Assert.Equal(StabilityVerdict.Stable, boundary.Intervals[^1].Inside);
    }

    [Fact]
    public void Run_DampingWithDoubleZero_TouchesAndTurnsBack()
    {
        var boundary = GainSweep.Run(Boundaries.Touch());

        var onset = Assert.Single(boundary.Onsets);
        Assert.Equal(CrossingDirection.Touching, onset.Direction);
        Assert.InRange(Math.Abs(onset.Gain - 1), 0, onset.GainUncertainty);
        Assert.InRange(onset.GainUncertainty, 0, 1e-5);
        Assert.Equal([StabilityVerdict.Stable, StabilityVerdict.Stable], boundary.Intervals.Select(i => i.Inside));
        Assert.Equal(StabilityVerdict.Marginal, boundary.VerdictAt(1));
    }

    [Fact]
    public void Run_NearTouch_ResolvedAsTwoCrossingsOrNone()
    {
        // x″ + ((1 − f)² ∓ 1e-10)x′ + 4x = 0.
        GainPath Shifted(double shift)
        {
            var law = ControlLaw.Cascade(
                Boundaries.Loop("inner", "x", "x", new() { Rate = 1 }, -2), Boundaries.Loop("outer", "x", "x", new() { Rate = 1 }, -0.5));
            return GainPath.CommonFactor(ClosedLoop.Create(Boundaries.One(1, 1 + shift, 4), law), GainRange.Between(0, 3.1));
        }

        var below = GainSweep.Run(Shifted(-1e-10)).Onsets;
        Assert.Equal([1 - 1e-5, 1 + 1e-5], below.Select(o => o.Gain), (a, b) => Math.Abs(a - b) < 1e-9);
        Assert.Equal([CrossingDirection.Destabilising, CrossingDirection.Restabilising], below.Select(o => o.Direction));
        Assert.Empty(GainSweep.Run(Shifted(1e-10)).Onsets);
    }

    [Fact]
    public void Run_FreeRigidBody_MarginalAtBest()
    {
        var boundary = GainSweep.Run(FeedbackCases.TwoMasses(0.05, 1, "x", GainRange.Between(0.1, 1)));

        Assert.Equal(StabilityVerdict.Marginal, Assert.Single(boundary.Intervals).Inside);
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.FreeMotion);
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.ReleaseNotStable);
    }

    [Fact]
    public void Run_RigidBodyThatASensorSeesButNoForceReaches_ZeroRootsAreNoOnset()
    {
        // Two equal masses pushed apart by an inner force, position measured from the ground on the first.
        var structure = ElasticStructure.FromRowMajor(["x", "y"], [1, 0, 0, 1], [0.1, -0.1, -0.1, 0.1], [1, -1, -1, 1]);
        var loop = FeedbackLoop.Create("g", Sensor.At("x"), Actuator.Between("x", "y"), new() { Position = 1 });
        var boundary = GainSweep.Run(GainPath.OneLoop(
            ClosedLoop.Create(structure, ControlLaw.Of(new LoopSetting(loop, 0.5))), "g", GainRange.Between(-5, 3)));

        // The relative motion r = x − y obeys r″ + 0.2r′ + (2 + g)r = 0: divergence at −2, nothing else.
        var onset = Assert.Single(boundary.Onsets);
        Assert.Equal(OnsetKind.Divergence, onset.Kind);
        Assert.Equal(-2, onset.Gain, 1e-12);
        Assert.Equal(new RootCount(0, 2, 2, 0), boundary.Intervals[^1].Count);
        Assert.Equal(Coverage.Complete, boundary.Completeness.Divergence);
    }

    [Fact]
    public void Run_LosslessLoop_UndecidedBelowCoalescenceUnstableAbove()
    {
        var boundary = GainSweep.Run(Boundaries.Lossless());

        Assert.Equal([StabilityVerdict.Undecided, StabilityVerdict.Undecided, StabilityVerdict.Unstable], boundary.Intervals.Select(i => i.Inside));
        Assert.Equal(3.5 - Math.Sqrt(2), boundary.Intervals[1].From, 1e-8);
        Assert.Null(boundary.Intervals[1].LeastDamped);
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.OpenStretch);
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.RootsOnAxis);
    }

    // G. Herrmann, I.-C. Jong, J. Appl. Mech. 32 (1965) 592–597: with equal dampers b the onset is 41/28 + b²/2. Confirmed formula.
    [Theory]
    [InlineData(0.1)]
    [InlineData(0.01)]
    public void Run_LightlyDampedLoop_OnsetFarBelowTheLosslessOne(double damping)
    {
        var onset = GainSweep.Run(Boundaries.Lossless(damping)).Onsets[0];

        Assert.Equal((41.0 / 28) + (damping * damping / 2), onset.Gain, 1e-9);
        Assert.Equal(Math.Sqrt(2.0 / 7), onset.Frequency.Radians, 1e-9);
    }

    /// <summary>Damping that changes sign far below what the roots can tell: nothing may be claimed, by whatever theorem.</summary>
    [Theory]
    [InlineData(2e-16, -1, 3e-16)]
    [InlineData(1e-17, -1e-17, 1.5)]
    public void Run_DampingChangesSignBelowRounding_NotCalledStable(double damping, double ratio, double to)
    {
        var boundary = GainSweep.Run(Boundaries.Path(Boundaries.One(1, damping, 1), Boundaries.Loop("g", "x", "x", new() { Rate = ratio }, 0.1 * to), 0, to));

        Assert.All(boundary.Intervals, i => Assert.Equal(StabilityVerdict.Undecided, i.Inside));
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.RootsOnAxis);
    }

    [Fact]
    public void Run_DampingBelowRoundingButPositiveThroughout_StableByTheorem()
    {
        var boundary = GainSweep.Run(Boundaries.Path(Boundaries.One(1, 1e-17, 1), Boundaries.Loop("g", "x", "x", new() { Position = 1 }, 1), 0, 2));

        Assert.Equal(StabilityVerdict.Stable, Assert.Single(boundary.Intervals).Inside);
    }

    [Fact]
    public void Run_LosslessLoopSymmetricAtOneGainOnly_UndecidedNotMarginal()
    {
        // K = [[2, −1], [−1 + g, 1]] without damping: only at g = 0 a theorem speaks.
        var structure = ElasticStructure.FromRowMajor(["x", "y"], [1, 0, 0, 1], [0, 0, 0, 0], [2, -1, -1, 1]);
        var boundary = GainSweep.Run(Boundaries.Path(structure, Boundaries.Loop("g", "x", "y", new() { Position = 1 }, 0.1), -0.5, 0.5));

        Assert.All(boundary.Intervals, i => Assert.Equal(StabilityVerdict.Undecided, i.Inside));
    }

    [Fact]
    public void Run_UndampedModeThatNoLoopReaches_UndecidedWhereTheRestIsStableUnstableWhereItIsNot()
    {
        // x is damped by 0.1 − g; y swings without damping on its own.
        var structure = ElasticStructure.FromRowMajor(["x", "y"], [1, 0, 0, 1], [0.1, 0, 0, 0], [1, 0, 0, 7]);
        var boundary = GainSweep.Run(Boundaries.Path(structure, Boundaries.Loop("g", "x", "x", new() { Rate = -1 }, 0.05), 0, 1));

        Assert.Equal([StabilityVerdict.Undecided, StabilityVerdict.Unstable], boundary.Intervals.Select(i => i.Inside));
        Assert.Equal(0.1, Assert.Single(boundary.Onsets).Gain, 1e-13);
    }

    [Fact]
    public void Run_LoopWhoseGainStaysZero_DoesNotHideTheFreeMotion()
    {
        var structure = ElasticStructure.FromRowMajor(["x", "y"], [1, 0, 0, 1], [0.1, -0.1, -0.1, 0.1], [1, -1, -1, 1]);
        var law = ControlLaw.Of(Boundaries.Loop("p", "x", "x", new() { Position = 1 }, 0), Boundaries.Loop("d", "x", "x", new() { Rate = 1 }, 0.1));
        var boundary = GainSweep.Run(GainPath.CommonFactor(ClosedLoop.Create(structure, law), GainRange.Between(0.5, 2)));

        Assert.Equal(StabilityVerdict.Marginal, Assert.Single(boundary.Intervals).Inside);
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.FreeMotion);
        Assert.Equal(Coverage.Complete, boundary.Completeness.Divergence);
    }

    [Fact]
    public void Run_StaticallySingularForEveryGain_DivergenceOnlySampled()
    {
        // K(f) = [1, f]ᵀ[1, f] as a cascade on one factor: singular for every f, with a null vector that moves.
        var names = DofNames.Of("x", "y");
        var structure = ElasticStructure.FromRowMajor(names, [1, 0, 0, 1], [0.1, 0, 0, 0.1], [1, 0, 0, 0]);
        FeedbackLoop Between(string name, string sensor, string actuator) => FeedbackLoop.Create(name, Sensor.At(sensor), Actuator.At(actuator), new() { Position = 1 });
        var law = ControlLaw.Cascade(new LoopSetting(Between("a", "y", "x"), 1), new LoopSetting(Between("c", "y", "y"), 1))
            .With(new LoopSetting(Between("b", "x", "y"), 1));
        var boundary = GainSweep.Run(GainPath.CommonFactor(ClosedLoop.Create(structure, law), GainRange.Between(0.5, 2)));

        Assert.Equal(Coverage.Sampled, boundary.Completeness.Divergence);
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.SingularForEveryGain);
        Assert.All(boundary.Intervals, i => Assert.NotEqual(StabilityVerdict.Stable, i.Inside));
    }

    [Fact]
    public void Run_BudgetSpent_TheRestIsUndecided()
    {
        var boundary = GainSweep.Run(Boundaries.Flutter(), new SweepOptions { MaximumDecompositions = 2, MaximumStep = 1 });

        Assert.Contains(boundary.Intervals, i => i.Inside == StabilityVerdict.Undecided);
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.OpenStretch);
        Assert.DoesNotContain(boundary.Intervals, i => i.Inside == StabilityVerdict.Stable && i.From < -0.1);
    }

    [Fact]
    public void Run_UnstableBeforeFeedback_SaysSo()
    {
        var boundary = GainSweep.Run(Boundaries.Path(Boundaries.One(1, -0.1, 1), Boundaries.Loop("g", "x", "x", new() { Rate = 1 }, 0.5), 0, 1));

        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.OpenLoopNotStable && c.Text.Contains("unstable", StringComparison.Ordinal));
        Assert.Equal(0.1, Assert.Single(boundary.Onsets).Gain, 1e-13);
    }

    [Fact]
    public void Run_MarginalBeforeFeedback_SaysSo()
    {
        var boundary = GainSweep.Run(Boundaries.Path(Boundaries.One(1, 0, 1), Boundaries.Loop("g", "x", "x", new() { Rate = 1 }, 0.5), 0, 1));

        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.OpenLoopNotStable && c.Text.Contains("marginal", StringComparison.Ordinal));
        Assert.Equal(StabilityVerdict.Marginal, boundary.Intervals[0].AtFrom);
        Assert.Equal(StabilityVerdict.Stable, boundary.Intervals[0].Inside);
    }

    [Fact]
    public void Run_ReleaseOutsideRange_SaysSo()
    {
        var boundary = GainSweep.Run(Boundaries.Flutter(0, 0.25));

        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.ReleaseOutsideRange);
        Assert.Equal(StabilityVerdict.Undecided, boundary.VerdictAt(boundary.ReleaseGain));
        Assert.Empty(boundary.Onsets);
        Assert.False(boundary.TryGetNearest(0.1, out _));
    }

    [Fact]
    public void Run_Anything_CarriesTheUsualCaution()
        => Assert.Contains(
            GainSweep.Run(Boundaries.Flutter()).Cautions,
            c => c.Kind == CautionKind.LinearScreening && c.Text.Contains("not a clearance", StringComparison.Ordinal));

    // Two equal masses and springs: K = [[2, g − 1], [−1, 2]], μ = 2 ± √(1 − g).
    [Fact]
    public void FindAll_UndampedLoop_LosslessCoalescenceWithTheWarning()
    {
        var structure = ElasticStructure.FromRowMajor(["x", "y"], [1, 0, 0, 1], [0, 0, 0, 0], [2, -1, -1, 2]);

        var boundary = OnsetFinder.FindAll(Boundaries.Path(structure, Boundaries.Loop("g", "y", "x", new() { Position = 1 }, 0.5), -4, 4));

        Assert.Equal([OnsetKind.Divergence, OnsetKind.LosslessCoalescence], boundary.Onsets.Select(o => o.Kind));
        Assert.Equal([-3, 1], boundary.Onsets.Select(o => o.Gain), (a, b) => Math.Abs(a - b) < 1e-13);
        Assert.Equal(Math.Sqrt(2), boundary.Onsets[1].Frequency.Radians, 1e-12);
        Assert.Null(boundary.Onsets[1].GrowthRateSlope);
        Assert.Equal([StabilityVerdict.Unstable, StabilityVerdict.Marginal, StabilityVerdict.Unstable], boundary.Intervals.Select(i => i.Inside));
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.LosslessLoop);
        Assert.Equal(Coverage.Complete, boundary.Completeness.Flutter);
    }

    [Theory]
    [InlineData(-0.5, true)]
    [InlineData(-0.75, false)]
    public void FindAll_StiffnessEntryMistyped_StiffnessNotSymmetricIsNamed(double entry, bool named)
    {
        var structure = ElasticStructure.FromRowMajor(["x", "y"], [1, 0, 0, 1], [0.1, 0, 0, 0.1], [1, -0.75, entry, 1]);

        foreach (var boundary in new[] { OnsetFinder.FindAll(Over(structure)), GainSweep.Run(Over(structure)) })
        {
            Assert.Equal(named, boundary.Cautions.Any(c => c.Kind == CautionKind.StiffnessNotSymmetric));
        }

        static GainPath Over(ElasticStructure structure) => Boundaries.Path(structure, Boundaries.Loop("g", "x", "x", new() { Rate = 1 }, 0.5), 0, 1);
    }

    [Fact]
    public void FindAll_UndampedModeAtANode_UnseenModeIsNamed()
    {
        var structure = ElasticStructure.FromRowMajor(["x", "y"], [1, 0, 0, 1], [0.1, 0, 0, 0], [1, 0, 0, 9]);

        var boundary = OnsetFinder.FindAll(Boundaries.Path(structure, Boundaries.Loop("g", "x", "x", new() { Rate = 1 }, 0.5), 0, 1));

        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.UnseenMode);
        Assert.Equal(StabilityVerdict.Marginal, Assert.Single(boundary.Intervals).Inside);
    }

    [Fact]
    public void Outcomes_EveryMember_IsNamedInThisFile()
    {
        string source = File.ReadAllText(Path());
        foreach (var type in new[] { typeof(OnsetKind), typeof(CrossingDirection), typeof(StabilityVerdict), typeof(Coverage), typeof(CautionKind) })
        {
            Assert.All(Enum.GetNames(type), name => Assert.Contains($"{type.Name}.{name}", source, StringComparison.Ordinal));
        }

        static string Path([System.Runtime.CompilerServices.CallerFilePath] string path = "") => path;
    }
}
