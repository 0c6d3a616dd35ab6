package lang

import "github.com/alecthomas/participle/v2/lexer"

// Reserved words are never a name unless quoted (or after a point).
const (
	kSelect lexer.TokenType = firstReserved + iota
	kDistinct
	kAll
	kFrom
	kWhere
	kHaving
	kUnion
	kIntersect
	kExcept
	kWith
	kAs
	kJoin
	kOn
	kAnd
	kOr
	kNot
	kIn
	kIs
	kLike
	kBetween
	kExists
	kCase
	kWhen
	kThen
	kElse
	kCast
	kNull
	kTrue
	kFalse
)

// Stop words are names anywhere, but never an alias without AS: they end an item
// or begin the next part of a query or a relation. Every word that begins a clause
// of a relation is one.
const (
	kGroup lexer.TokenType = firstStop + iota
	kOrder
	kBy
	kLimit
	kOffset
	kEnd
	kInner
	kLeft
	kRight
	kFull
	kCross
	kNatural
	kUsing
	kTo
	kOf
	kWithin
	kUnclipped
	kFor
	kAt
	kStep
	kAgainst
	kAbove
	kBelow
	kWeighted
	kFilter
	kOver
	kMethod
	kNumber
	kAmong
	kClearance
	kThresholds
	kMeasured
	kOmitting
	kStretched
	kKeep
	kExpecting
	kThrough
	kDistances
	kAcross
	kUntil
	kEvery
	kStamp
	kLongest
	kBridging
	kWeights
	kUncertainty
)

// Plain words mean something in one place only and are ordinary names elsewhere.
const (
	kCreate lexer.TokenType = firstPlain + iota
	kDrop
	kLet
	kSave
	kExplain
	kRequire
	kList
	kDescribe
	kRun
	kSet
	kHelp
	kQuit
	kDraw
	kShow
	kTitle
	kText
	kReplace
	kCampaign
	kTable
	kSolid
	kView
	kFrame
	kDiagrams
	kFiles
	kFile
	kMatching
	kOverwrite
	kUnits
	kProvenance
	kQuote
	kFormulas
	kNone
	kShaded
	kLimits
	kAlong
	kShowing
	kSeen
	kId
	kPosition
	kGeographic
	kOrigin
	kCoordinates
	kDuplicates
	kSplit
	kMean
	kFirst
	kFail
	kTolerance
	kDelimiter
	kDecimal
	kMark
	kMissing
	kRefused
	kHeading
	kLine
	kSheet
	kEncoding
	kTime
	kZone
	kPreamble
	kAfter
	kCensored
	kUnpivot
	kAsc
	kDesc
	kNulls
	kLast
	kValues
	kOuter
	kRow
	kRows
	kRange
	kPartition
	kUnbounded
	kPreceding
	kFollowing
	kCurrent
	kEach
	kBecause
	kNormal
	kUp
	kGap
	kTransect
	kCommon
	kBox
	kPrism
	kHole
	kMesh
	kUnit
	kWeld
	kBoxes
	kTerrain
	kEnvelope
	kMargin
	kPlus
	kMinus
	kTimestamp
	kInterval
	kEscape
	kUnknown
	kOverlaps
	kOutside
)

// wordText spells every known word; the index is its token type.
var wordText = [...]string{
	kSelect:      "SELECT",
	kDistinct:    "DISTINCT",
	kAll:         "ALL",
	kFrom:        "FROM",
	kWhere:       "WHERE",
	kHaving:      "HAVING",
	kUnion:       "UNION",
	kIntersect:   "INTERSECT",
	kExcept:      "EXCEPT",
	kWith:        "WITH",
	kAs:          "AS",
	kJoin:        "JOIN",
	kOn:          "ON",
	kAnd:         "AND",
	kOr:          "OR",
	kNot:         "NOT",
	kIn:          "IN",
	kIs:          "IS",
	kLike:        "LIKE",
	kBetween:     "BETWEEN",
	kExists:      "EXISTS",
	kCase:        "CASE",
	kWhen:        "WHEN",
	kThen:        "THEN",
	kElse:        "ELSE",
	kCast:        "CAST",
	kNull:        "NULL",
	kTrue:        "TRUE",
	kFalse:       "FALSE",
	kGroup:       "GROUP",
	kOrder:       "ORDER",
	kBy:          "BY",
	kLimit:       "LIMIT",
	kOffset:      "OFFSET",
	kEnd:         "END",
	kInner:       "INNER",
	kLeft:        "LEFT",
	kRight:       "RIGHT",
	kFull:        "FULL",
	kCross:       "CROSS",
	kNatural:     "NATURAL",
	kUsing:       "USING",
	kTo:          "TO",
	kOf:          "OF",
	kWithin:      "WITHIN",
	kUnclipped:   "UNCLIPPED",
	kFor:         "FOR",
	kAt:          "AT",
	kStep:        "STEP",
	kAgainst:     "AGAINST",
	kAbove:       "ABOVE",
	kBelow:       "BELOW",
	kWeighted:    "WEIGHTED",
	kFilter:      "FILTER",
	kOver:        "OVER",
	kMethod:      "METHOD",
	kNumber:      "NUMBER",
	kAmong:       "AMONG",
	kClearance:   "CLEARANCE",
	kThresholds:  "THRESHOLDS",
	kMeasured:    "MEASURED",
	kOmitting:    "OMITTING",
	kStretched:   "STRETCHED",
	kKeep:        "KEEP",
	kExpecting:   "EXPECTING",
	kThrough:     "THROUGH",
	kDistances:   "DISTANCES",
	kAcross:      "ACROSS",
	kUntil:       "UNTIL",
	kEvery:       "EVERY",
	kStamp:       "STAMP",
	kLongest:     "LONGEST",
	kBridging:    "BRIDGING",
	kWeights:     "WEIGHTS",
	kUncertainty: "UNCERTAINTY",
	kCreate:      "CREATE",
	kDrop:        "DROP",
	kLet:         "LET",
	kSave:        "SAVE",
	kExplain:     "EXPLAIN",
	kRequire:     "REQUIRE",
	kList:        "LIST",
	kDescribe:    "DESCRIBE",
	kRun:         "RUN",
	kSet:         "SET",
	kHelp:        "HELP",
	kQuit:        "QUIT",
	kDraw:        "DRAW",
	kShow:        "SHOW",
	kTitle:       "TITLE",
	kText:        "TEXT",
	kReplace:     "REPLACE",
	kCampaign:    "CAMPAIGN",
	kTable:       "TABLE",
	kSolid:       "SOLID",
	kView:        "VIEW",
	kFrame:       "FRAME",
	kDiagrams:    "DIAGRAMS",
	kFiles:       "FILES",
	kFile:        "FILE",
	kMatching:    "MATCHING",
	kOverwrite:   "OVERWRITE",
	kUnits:       "UNITS",
	kProvenance:  "PROVENANCE",
	kQuote:       "QUOTE",
	kFormulas:    "FORMULAS",
	kNone:        "NONE",
	kShaded:      "SHADED",
	kLimits:      "LIMITS",
	kAlong:       "ALONG",
	kShowing:     "SHOWING",
	kSeen:        "SEEN",
	kId:          "ID",
	kPosition:    "POSITION",
	kGeographic:  "GEOGRAPHIC",
	kOrigin:      "ORIGIN",
	kCoordinates: "COORDINATES",
	kDuplicates:  "DUPLICATES",
	kSplit:       "SPLIT",
	kMean:        "MEAN",
	kFirst:       "FIRST",
	kFail:        "FAIL",
	kTolerance:   "TOLERANCE",
	kDelimiter:   "DELIMITER",
	kDecimal:     "DECIMAL",
	kMark:        "MARK",
	kMissing:     "MISSING",
	kRefused:     "REFUSED",
	kHeading:     "HEADING",
	kLine:        "LINE",
	kSheet:       "SHEET",
	kEncoding:    "ENCODING",
	kTime:        "TIME",
	kZone:        "ZONE",
	kPreamble:    "PREAMBLE",
	kAfter:       "AFTER",
	kCensored:    "CENSORED",
	kUnpivot:     "UNPIVOT",
	kAsc:         "ASC",
	kDesc:        "DESC",
	kNulls:       "NULLS",
	kLast:        "LAST",
	kValues:      "VALUES",
	kOuter:       "OUTER",
	kRow:         "ROW",
	kRows:        "ROWS",
	kRange:       "RANGE",
	kPartition:   "PARTITION",
	kUnbounded:   "UNBOUNDED",
	kPreceding:   "PRECEDING",
	kFollowing:   "FOLLOWING",
	kCurrent:     "CURRENT",
	kEach:        "EACH",
	kBecause:     "BECAUSE",
	kNormal:      "NORMAL",
	kUp:          "UP",
	kGap:         "GAP",
	kTransect:    "TRANSECT",
	kCommon:      "COMMON",
	kBox:         "BOX",
	kPrism:       "PRISM",
	kHole:        "HOLE",
	kMesh:        "MESH",
	kUnit:        "UNIT",
	kWeld:        "WELD",
	kBoxes:       "BOXES",
	kTerrain:     "TERRAIN",
	kEnvelope:    "ENVELOPE",
	kMargin:      "MARGIN",
	kPlus:        "PLUS",
	kMinus:       "MINUS",
	kTimestamp:   "TIMESTAMP",
	kInterval:    "INTERVAL",
	kEscape:      "ESCAPE",
	kUnknown:     "UNKNOWN",
	kOverlaps:    "OVERLAPS",
	kOutside:     "OUTSIDE",
}
